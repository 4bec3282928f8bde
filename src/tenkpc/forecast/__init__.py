"""Counts: a compiled detector, folded with a burst, and what is read off the result."""
