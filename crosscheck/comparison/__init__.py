"""Both sides of one section joined and judged; the Result that every report is a pure function of."""
