"""The shipped notebooks: copied into a folder of the user's, and opened there."""

import json
import os
import secrets
import shutil
import socket
import subprocess
import sys
from collections.abc import Iterator
from contextlib import closing
from importlib.util import find_spec
from pathlib import Path
from typing import NamedTuple
from urllib.parse import quote

from pipeflex.errors import Fault, InputError

_SUFFIX = ".ipynb"
_LOOPBACK = "127.0.0.1"


class Copied(NamedTuple):
    """A file in the user's folder, and whether it was put there now."""

    path: Path
    new: bool


def shipped(folder: Path) -> tuple[str, ...]:
    """Names of the notebooks in the folder of the package."""
    return tuple(sorted(path.stem for path in folder.glob(f"*{_SUFFIX}")))


def chosen(name: str, folder: Path) -> str:
    """The notebook that a name or its beginning stands for; the first without a name.

    Raises
    ------
    InputError
        No such notebook, or several; names them.
    """
    known = shipped(folder)
    wanted = name.removesuffix(_SUFFIX)
    found = [one for one in known if one == wanted] or [one for one in known if one.startswith(wanted)]
    if not name and found:
        return found[0]
    if len(found) != 1:
        raise InputError(Fault("name", name, allowed="a notebook", near=known))
    return found[0]


def copy_into(name: str, source: Path, folder: Path) -> tuple[Copied, ...]:
    """Copy a notebook and the design files that it names; what is there already stays as it is.

    Raises
    ------
    InputError
        Where the folder cannot be written in.
    """
    try:
        folder.mkdir(parents=True, exist_ok=True)
        return tuple(_copies(name, source, folder))
    except OSError as error:
        reason = error.strerror or str(error)
        raise InputError(Fault(str(folder), reason, allowed="a folder that can be written in")) from None


def _copies(name: str, source: Path, folder: Path) -> Iterator[Copied]:
    notebook = source / f"{name}{_SUFFIX}"
    about = json.loads(notebook.read_text("utf-8"))["metadata"].get("pipeflex", {})
    for path in (notebook, *(source / design for design in about.get("designs", ()))):
        place = folder / path.name
        new = not os.path.lexists(place)
        if new:
            shutil.copyfile(path, place)
        yield Copied(place, new)


def has_screen() -> bool:
    """Whether a browser can show itself."""
    if sys.platform in ("win32", "darwin"):
        return True
    return bool(os.environ.get("DISPLAY") or os.environ.get("WAYLAND_DISPLAY"))


class Lab:
    """JupyterLab on the loopback interface, showing one document.

    Raises
    ------
    InputError
        Where JupyterLab is not installed.
    """

    def __init__(self, notebook: Path) -> None:
        if find_spec("jupyterlab") is None:
            wanted = "JupyterLab; it comes with pip install 'pipeflex[lab]'"
            raise InputError(Fault("jupyterlab", "not installed", allowed=wanted))
        self.notebook, self._token = notebook, secrets.token_hex(16)
        with closing(socket.socket()) as free:
            free.bind((_LOOPBACK, 0))
            self._port = int(free.getsockname()[1])

    @property
    def address(self) -> str:
        """Where the notebook is shown."""
        return f"http://{_LOOPBACK}:{self._port}/doc/tree/{quote(self.notebook.name)}?token={self._token}"

    def command(self, browser: bool) -> list[str]:
        """The command that starts JupyterLab."""
        return [
            sys.executable, "-m", "jupyterlab",
            f"--ServerApp.root_dir={self.notebook.parent.resolve()}",
            f"--ServerApp.ip={_LOOPBACK}", f"--ServerApp.port={self._port}", "--ServerApp.port_retries=0",
            f"--LabApp.default_url=/doc/tree/{quote(self.notebook.name)}",
            f"--ServerApp.open_browser={browser}", "--Application.log_level=WARN",
            *(["--allow-root"] if getattr(os, "geteuid", lambda: 1)() == 0 else []),
        ]  # fmt: skip

    def run(self, browser: bool) -> int:
        """Run it until the user stops it; the token goes by the environment, where no other user sees it."""
        return subprocess.run(self.command(browser), env={**os.environ, "JUPYTER_TOKEN": self._token}).returncode
