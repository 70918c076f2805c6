"""Mechanics of a pipe run: pure functions of SI numbers, columns or single; no records, no code rules."""
