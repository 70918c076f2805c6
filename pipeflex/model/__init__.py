"""Frozen records of a design and its outcome."""
