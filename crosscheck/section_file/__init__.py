"""From a section file to a checked, frozen SectionFile, or all its faults at once."""
