"""Tables and literature behind an outcome, each with how it is known; and what every sheet cautions of."""

from dataclasses import dataclass
from typing import Final

from pipeflex import present
from pipeflex.methods.basis import table_values
from pipeflex.methods.solving import literature
from pipeflex.model.design import Design
from pipeflex.present import UnitSystem

__all__ = ["CAUTIONS", "TableRow", "literature", "tables"]

CAUTIONS: Final = (
    "A sizing aid in the hands of a qualified engineer. The governing edition of the code, the owner's"
    " specification, local law and licensed practice prevail over it.",
    "Values and clauses marked as from memory are to be confirmed in the licensed standard before use.",
    "Not covered: least wall and thinning of bends; the creep range; brittle fracture at the minimum temperature.",
    "Not covered: permitted loads of nozzles and machines. The maker's limits count only as far as they were entered.",
    "Not covered: vibration, surge and steam hammer, slug flow, earthquake, wind, snow.",
    "Not covered: small branches near the loop; stresses in shoes and welded attachments; what the rack can carry.",
    "Not covered: lined, jacketed, traced and buried lines; soldered joints.",
)
"""What the engineer must see to."""


@dataclass(frozen=True, slots=True)
class TableRow:
    """One value read from a table: where, what, and how it is known."""

    table: str
    entry: str
    temperature: str
    value: str
    origin: str


def tables(design: Design, units: UnitSystem = "metric") -> tuple[TableRow, ...]:
    """Every table value that a single design reads."""
    rows = []
    for curve, i in table_values(design):
        own = i >= curve.own
        title = curve.title if own else f"{curve.title}; below its first row: {curve.below}"
        rows.append(
            TableRow(
                table=title,
                entry=curve.row,
                temperature=present.text(float(curve.temperature[i]), "temperature", units),
                value=present.text(float(curve.value[i]), curve.kind, units),
                origin=str(curve.origin[i]),
            )
        )
    return tuple(rows)
