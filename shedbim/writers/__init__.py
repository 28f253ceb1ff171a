"""A Shed in, one kind of output out; a writer returns text or bytes, or writes to a sink handed to it."""
