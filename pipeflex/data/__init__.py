"""Reads the tables: pipe sizes, materials, bends; SI numbers with their provenance."""
