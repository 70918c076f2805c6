"""Every table: readable, its source said, unchanged since it was described, right where it is known."""

import hashlib
import tomllib
from decimal import Decimal

import numpy as np
import pytest

from pipeflex.data.tables import PROVENANCES, TEXT, UNITS, table, tables
from pipeflex.quantities import KINDS

from .conftest import IDS, TABLES


def described(id):
    return tomllib.loads((TABLES / f"{id}.toml").read_text("utf-8"))


def test_every_file_belongs_to_a_pair():
    files = {p.relative_to(TABLES).as_posix() for p in TABLES.rglob("*") if p.is_file()}
    assert files == {f"{id}.{suffix}" for id in IDS for suffix in ("csv", "toml")}
    assert tables() == tuple(IDS)


@pytest.mark.parametrize("id", IDS)
def test_csv_is_the_one_described(id):
    """After a change of the csv, write its new sha256 into the toml and the change into the note."""
    assert described(id)["sha256"] == hashlib.sha256((TABLES / f"{id}.csv").read_bytes()).hexdigest()


@pytest.mark.parametrize("id", IDS)
def test_columns_say_unit_kind_and_meaning(id):
    held = table(id)
    assert held.rows
    for column in held.columns.values():
        assert column.meaning
        if column.kind == TEXT:
            assert not column.unit
        else:
            assert column.kind in KINDS
            assert column.unit in UNITS
            assert np.isfinite(held.numbers(column.name)).any()


@pytest.mark.parametrize("id", IDS)
def test_source_and_provenance_are_said(id):
    held = table(id)
    assert held.title
    assert held.document
    assert held.source.startswith(held.document)
    recalled = [name for name in held.columns if held.provenance_of(name) == "memory"]
    assert held.confirm == bool(recalled)
    assert held.provenance in PROVENANCES
    assert set(described(id)) <= {
        *(
            "title",
            "provenance",
            "confirm",
            "index",
            "interpolation",
            "reference_temperature",
            "below",
            "above",
        ),
        *("note", "sha256", "source", "columns", "spot"),
    }


@pytest.mark.parametrize("id", [id for id in IDS if described(id).get("index")])
def test_curves_rise_along_their_index_and_say_what_holds_outside(id):
    held = table(id)
    assert held.interpolation in ("linear", "linear in growth")
    assert held.below
    assert held.above
    for name, column in held.columns.items():
        if column.kind != TEXT:
            x, y = held.curve(name)
            assert np.all(np.diff(x) > 0)
            assert np.isfinite(y).all()
            assert len(x) > 1


@pytest.mark.parametrize("id", [id for id in IDS if id.startswith("expansion/")])
def test_expansion_has_its_reference_temperature_as_a_row(id):
    held = table(id)
    reference = held.reference_temperature
    assert reference is not None
    assert reference in held.numbers("temperature")
    for name, column in held.columns.items():
        if column.kind == "strain":
            x, y = held.curve(name)
            assert y[x == reference] == 0
            assert np.all(np.diff(y) > 0)


@pytest.mark.parametrize("id", IDS)
def test_spot_values(id):
    """A few cells against a source that is not the table's own transcription."""
    held, spots = table(id), described(id)["spot"]
    assert spots
    for spot in spots:
        cell = held.texts(spot["column"])[held.find(**spot["where"])]
        off = abs(Decimal(cell) - Decimal(spot["value"]))
        assert off <= Decimal(spot.get("within", "0")), (spot["source"], cell)
