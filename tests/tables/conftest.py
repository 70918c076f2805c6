"""The tables of the checkout, without those of whoever runs the tests."""

from fractions import Fraction
from pathlib import Path

import pytest

TABLES = Path(__file__).parents[2] / "tables"
IDS = sorted(path.relative_to(TABLES).with_suffix("").as_posix() for path in TABLES.glob("*/*.toml"))


@pytest.fixture(autouse=True)
def no_user_tables(monkeypatch):
    monkeypatch.delenv("PIPEFLEX_HOME", raising=False)


def inches(nps: str) -> float:
    """NPS as printed ("1-1/4") -> number."""
    return float(sum(Fraction(part) for part in nps.split("-")))
