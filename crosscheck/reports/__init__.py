"""Reports of a Result: the first screen, tables, JSON."""
