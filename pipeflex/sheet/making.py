"""From a design to its sheet in one call, and from a sheet back to its design."""

import os
from pathlib import Path

from pipeflex.errors import Fault, InputError
from pipeflex.files import design_file
from pipeflex.methods import ladder, reserve, solve
from pipeflex.model.design import Design
from pipeflex.present import UnitSystem
from pipeflex.sheet.design_text import read_design
from pipeflex.sheet.page import Sheet

_LARGEST_PAGE = 20_000_000


def sheet(design: Design, units: UnitSystem = "metric", method: str | None = None, paper: str = "A4") -> Sheet:
    """The calc sheet of a single design, with its ladder and where its answer turns.

    Parameters
    ----------
    units : "metric" or "us".
    method : key of a method; by default the highest that is inside its limits.
    paper : "A4" or "Letter".

    Raises
    ------
    InputError, ScopeError
        As `solve`.
    """
    rungs = ladder(design)
    outcome = rungs.best if method is None and rungs.best is not None else solve(design, method)
    return Sheet(
        outcome=outcome,
        units=units,
        design_text=design_file.write_design(design),
        fingerprint=design.fingerprint,
        ladder=rungs,
        turns=reserve(design, key=outcome.method),
        paper=paper,
    )


def reopen(path: str | os.PathLike[str]) -> Design:
    """The exact design of a sheet that was written before.

    Raises
    ------
    InputError
        A file that cannot be read, or no sheet.
    """
    try:
        if os.path.getsize(path) > _LARGEST_PAGE:
            raise InputError(Fault(str(path), "a file of this size", allowed="a sheet of at most 20 MB"))
        page = Path(path).read_text(encoding="utf-8")
    except (OSError, UnicodeDecodeError) as error:
        reason = getattr(error, "strerror", None) or "not text"
        raise InputError(Fault(str(path), reason, allowed="a sheet that can be read")) from None
    return design_file.read_design(read_design(page), origin=str(path))
