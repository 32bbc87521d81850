"""A section's family: one or two parameters over a range, criteria crossed, theory valid."""
