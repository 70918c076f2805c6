"""Desks: one line of work on one screen, live in a notebook, bound to its design file."""

from pipeflex.desks.loop import LoopDesk

__all__ = ["LoopDesk"]
