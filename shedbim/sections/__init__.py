"""Published sections: their shapes, their tables of sizes, and the look-up of a designation."""
