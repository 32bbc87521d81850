"""Outlines from drawings."""
