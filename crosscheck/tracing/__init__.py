"""Walls found in an outline: from a drawing to a section file."""
