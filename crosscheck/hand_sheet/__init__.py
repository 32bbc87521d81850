"""The hand sheet: the classical calculation of one load, for a checker with a calculator."""
