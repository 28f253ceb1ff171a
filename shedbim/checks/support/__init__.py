"""What holds each piece up: joints that hold together, ends that are joined, and a way for loads to a base."""
