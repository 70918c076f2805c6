"""A design file of its own for each test, and an empty folder of the user."""

from __future__ import annotations

import shutil
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest

from pipeflex.desks import LoopDesk

DEMO = Path(__file__).resolve().parents[2] / "notebooks" / "line-1204.toml"


@pytest.fixture
def line(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    monkeypatch.setenv("PIPEFLEX_HOME", str(tmp_path / "home"))
    return Path(shutil.copy(DEMO, tmp_path / "line-1204.toml"))


@pytest.fixture
def desks(line: Path) -> Iterator[Callable[..., LoopDesk]]:
    """Open desks of the line; they are closed at the end."""
    opened: list[LoopDesk] = []

    def opener(path: Path = line, **how: object) -> LoopDesk:
        opened.append(LoopDesk(path, **how))  # type: ignore[arg-type]
        return opened[-1]

    yield opener
    for desk in opened:
        desk.close()


@pytest.fixture
def desk(desks: Callable[..., LoopDesk]) -> LoopDesk:
    return desks()
