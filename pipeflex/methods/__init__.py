"""Methods of rising fidelity, and the ways to ask them."""

from pipeflex.methods.search import fit, reserve, sift, vary
from pipeflex.methods.solving import METHODS, ladder, solve

__all__ = ["METHODS", "fit", "ladder", "reserve", "sift", "solve", "vary"]
