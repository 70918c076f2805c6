"""One server and one browser a session; one page a notebook, judged when the test ends."""

from __future__ import annotations

import os
import shutil
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import TYPE_CHECKING, Any

import pytest

if TYPE_CHECKING:
    from playwright.sync_api import Browser

    from .harness import Lab
    from .server import Server


def _without(reason: str) -> None:
    """Skip, or fail where a browser was promised."""
    if os.environ.get("PIPEFLEX_NEED_BROWSER") == "1":
        pytest.fail(f"PIPEFLEX_NEED_BROWSER is set, but {reason}")
    pytest.skip(reason)


@pytest.fixture(scope="session")
def browser() -> Iterator[Browser]:
    """A headless Chromium."""
    try:
        from playwright.sync_api import sync_playwright
    except ImportError:
        _without("playwright is not installed")
    chromium = shutil.which("chromium") or shutil.which("chromium-browser")
    if chromium is None:
        _without("no chromium was found on the path")
    from .harness import CHROMIUM_ARGS

    with sync_playwright() as play:
        running = play.chromium.launch(executable_path=chromium, headless=True, args=CHROMIUM_ARGS)
        yield running
        running.close()


@pytest.fixture(scope="session")
def server(browser: Browser, tmp_path_factory: pytest.TempPathFactory) -> Iterator[Server]:
    """A JupyterLab of our own; asked for after the browser, so that a skip costs nothing."""
    from .server import Server

    running = Server(tmp_path_factory.mktemp("jupyter"))
    yield running
    running.stop()


@pytest.fixture
def open_notebook(browser: Browser, server: Server) -> Iterator[Callable[..., Lab]]:
    """Open notebooks (path, companion files, viewport, dark, run); at the end none may have a problem."""
    from .harness import Lab

    opened: list[Lab] = []

    def opener(notebook: Path, *companions: Path, **how: Any) -> Lab:
        opened.append(Lab.open(browser, server, notebook, companions, **how))
        return opened[-1]

    yield opener
    problems = [problem for lab in opened for problem in lab.problems()]
    for lab in opened:
        lab.close()
    assert not problems, "\n".join(problems)
