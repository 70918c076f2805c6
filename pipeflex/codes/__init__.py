"""Piping codes: clause functions with the code's own symbols, and one `PipingCode` for each edition.

Clause texts are from memory unless a test cites them as read: confirm against the licensed standard.
"""

from functools import cache

from pipeflex.errors import Fault, TableError
from pipeflex.model.duty import PipingCode


@cache
def codes() -> dict[str, PipingCode]:
    """All editions by key."""
    from pipeflex.codes import b31_3

    return {c.key: c for c in b31_3.editions()}


def code(key: str) -> PipingCode:
    """The edition of that key ("B31.3-2018").

    Raises
    ------
    TableError
        No such edition; the known ones are named.
    """
    known = codes()
    if key not in known:
        raise TableError(Fault("code.key", key, allowed="an edition held here", near=tuple(known)))
    return known[key]
