"""The user's folder: table values confirmed before, proposed for the next design and never applied by themselves."""

import os
import sys
from pathlib import Path
from typing import Final

from pipeflex.errors import PipeflexError
from pipeflex.files.record_form import Faults, only_known, table, taken
from pipeflex.files.text_file import read_text, write_text
from pipeflex.files.toml_text import document, toml
from pipeflex.files.trade_forms import CONFIRMED
from pipeflex.model.design import Design
from pipeflex.model.duty import Confirmed

FILE: Final = "confirmed.toml"


def folder() -> Path:
    """The user's folder: PIPEFLEX_HOME if that is set, else where the platform keeps settings."""
    if home := os.environ.get("PIPEFLEX_HOME"):
        return Path(home)
    if sys.platform == "win32":
        root = os.environ.get("APPDATA") or Path.home() / "AppData" / "Roaming"
    elif sys.platform == "darwin":
        root = Path.home() / "Library" / "Application Support"
    else:
        root = os.environ.get("XDG_CONFIG_HOME") or Path.home() / ".config"
    return Path(root) / "pipeflex"


def proposed() -> tuple[Confirmed, ...]:
    """Values that the user has confirmed before, for the user to take or leave.

    Raises
    ------
    PipeflexError
        Where the file in the folder cannot be read; names each entry at fault.
    """
    path = folder() / FILE
    if not os.path.exists(path):
        return ()
    text, faults = read_text(path), Faults()
    try:
        given = document(text)
        with faults.at():
            only_known(given, ("confirmed",))
        held: tuple[Confirmed, ...] = ()
        with faults.at():
            held = taken(given.get("confirmed", []), dict(Design.specs())["confirmed"], "confirmed", CONFIRMED)
        faults.tell()
    except PipeflexError as error:
        raise error.prefixed(str(path)) from None
    return held


def remember(*confirmed: Confirmed) -> None:
    """Keep confirmed values for later designs; a value said again replaces the earlier one.

    Raises
    ------
    PipeflexError
        Where what is kept there cannot be read, or the folder cannot be written in.
    """
    kept = {_which(one): one for one in (*proposed(), *confirmed)}
    path = folder() / FILE
    write_text(path, toml({"confirmed": [table(one, CONFIRMED) for one in kept.values()]}), make_folder=True)


def _which(one: Confirmed) -> tuple[str, str, float]:
    return one.table, one.row, one.temperature
