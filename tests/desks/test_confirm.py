"""Table values from memory: listed, confirmed, kept, proposed."""

from __future__ import annotations

from pathlib import Path

import pytest

from pipeflex.desks import LoopDesk
from pipeflex.desks.confirm import ConfirmBand, asked
from pipeflex.desks.entry import Button, EntryField, Part
from pipeflex.files import design_file, user_folder
from pipeflex.methods.basis import table_values
from pipeflex.model.words import Origin

from .hands import strike


def parts(band: ConfirmBand) -> list[Part]:
    return [inner for part in band.parts for inner in (part, *part.parts)]


def entries(band: ConfirmBand) -> dict[str, EntryField]:
    return {p.label: p for p in parts(band) if isinstance(p, EntryField)}


@pytest.fixture
def band(desk: LoopDesk) -> ConfirmBand:
    strike(desk.ask, "click")
    assert desk.confirming.open
    return desk.confirm


def test_every_value_from_memory_is_asked_for(desk: LoopDesk, band: ConfirmBand) -> None:
    used = [c for c, i in table_values(desk.held) if c.origin[i] == Origin.MEMORY]
    wanted = asked(desk.held)
    assert used
    assert {a.kind for a in wanted} == {c.kind for c in used}
    assert all(a.words("metric") in entries(band) for a in wanted)


def test_a_value_is_confirmed_kept_and_proposed(desk: LoopDesk, band: ConfirmBand, line: Path) -> None:
    one = next(a for a in asked(desk.held) if a.temperature > 500)
    entry = entries(band)[one.words("metric")]
    strike(entry, "commit", text="130 MPa")
    assert "initials" in entry.error
    strike(entries(band)["Initials"], "commit", text="AB")
    strike(entries(band)["Date"], "commit", text="2026-03-01")
    strike(entry, "commit", text="five")
    assert entry.error
    before = float(desk.held.pipe.material.stresses[one.table].value[-1])
    strike(entry, "commit", text="130 MPa")
    confirmed = design_file.load(line).confirmed
    assert [(c.value, c.by, c.date) for c in confirmed] == [(130e6, "AB", "2026-03-01")]
    origins = [c.origin[i] for c, i in table_values(desk.held)]
    assert "confirmed by AB on 2026-03-01" in origins
    assert one not in asked(desk.held)
    assert before == float(desk.held.pipe.material.stresses[one.table].value[-1]), "no other value has changed"
    assert desk.memory.text == "3 table values are from memory"
    desk.undo()
    assert one in asked(desk.held)
    assert [c.value for c in user_folder.proposed()] == [130e6]
    [take] = [p for p in parts(band) if isinstance(p, Button)]
    assert "130 MPa by AB on 2026-03-01" in take.text
    strike(take, "click")
    assert [c.value for c in desk.held.confirmed] == [130e6]


def test_nothing_left_to_confirm(desk: LoopDesk, band: ConfirmBand) -> None:
    strike(entries(band)["Initials"], "commit", text="AB")
    strike(entries(band)["Date"], "commit", text="2026-03-01")
    while wanted := asked(desk.held):
        one = wanted[0]
        strike(entries(band)[one.words("metric")], "commit", text=f"{one.value / 1e6!r} MPa")
    assert asked(desk.held) == ()
    assert desk.ask.hidden
    assert desk.memory.text == ""
