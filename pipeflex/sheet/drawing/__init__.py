"""The drawing of a line: from the outcome to plain lists of strokes, areas and labels."""
