"""pipeflex: how much a pipe run grows, what takes it, and a calculation that a checker can follow."""
