"""The verification suite: reference rows, code checks, coverage and evidence."""
