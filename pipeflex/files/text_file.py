"""Text files read with clear errors, and written whole or not at all."""

import os
import shutil
from contextlib import suppress
from pathlib import Path
from typing import Final, Never

from pipeflex.errors import Fault, InputError

LARGEST: Final = 1_000_000
"""Most bytes of a file that is read; a design takes some thousand."""


def read_text(path: str | os.PathLike[str]) -> str:
    """The text of a file.

    Raises
    ------
    InputError
        Where the file cannot be opened, is larger than `LARGEST`, or is no UTF-8 text.
    """
    try:
        with open(path, "rb") as file:
            data = file.read(LARGEST + 1)
    except (OSError, ValueError) as error:
        _refuse(path, error, "a file that can be read")
    if len(data) > LARGEST:
        raise InputError(Fault(os.fspath(path), None, allowed=f"a file of at most {LARGEST:,} bytes"))
    try:
        return data.decode("utf-8-sig").replace("\r\n", "\n")
    except UnicodeDecodeError as error:
        raise InputError(Fault(os.fspath(path), f"byte {error.start + 1}", allowed="a text file in UTF-8")) from None


def write_text(path: str | os.PathLike[str], text: str, make_folder: bool = False) -> None:
    """Write a file whole: beside it first, then in its place, so that no reader ever sees a part.

    Raises
    ------
    InputError
        Where the folder is missing or may not be written in.
    """
    place = Path(os.path.realpath(path))
    beside = place.with_name(f".{place.name}.{os.getpid()}.part")
    try:
        if make_folder:
            place.parent.mkdir(parents=True, exist_ok=True)
        with open(beside, "w", encoding="utf-8", newline="\n") as file:
            file.write(text)
            file.flush()
            os.fsync(file.fileno())
        if place.is_file():
            shutil.copymode(place, beside)
        os.replace(beside, place)
    except (OSError, ValueError) as error:
        with suppress(OSError):
            beside.unlink()
        _refuse(path, error, "a file that can be written")


def _refuse(path: str | os.PathLike[str], error: OSError | ValueError, allowed: str) -> Never:
    reason = getattr(error, "strerror", None) or str(error)
    raise InputError(Fault(os.fspath(path), reason, allowed=allowed)) from None
