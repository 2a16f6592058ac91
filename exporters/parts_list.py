"""parts_list.csv: what to make and what to buy."""

from __future__ import annotations

import csv
import io
from collections.abc import Mapping
from dataclasses import dataclass

from exporters.check_json import tidy
from exporters.shown import factor_text
from loads.examine import Examination
from parts.bought import bought
from parts.shape import mass

COLUMNS = (
    "part", "number", "revision", "quantity", "material", "stock", "mass_kg", "process", "made_or_bought", "note",
)  # fmt: skip


@dataclass(frozen=True, slots=True)
class Item:
    """One line of the parts list; ``mass_kg`` is that of one piece, None where it is bought."""

    part: str
    number: str
    revision: str
    quantity: int
    material: str
    stock: str
    mass_kg: float | None
    process: str
    made_or_bought: str
    note: str


def items(e: Examination, masses: Mapping[str, float] | None = None) -> list[Item]:
    """Made parts first, then what is bought. ``masses`` (kg, by part name) are the solids', where they were made."""
    who = e.design.identity
    rows = []
    for part in e.parts:
        kilograms = mass(part) if masses is None or part.name not in masses else masses[part.name]
        note = "; ".join([*part.notes, *shortfalls(e, part.key)])
        rows.append(
            Item(part.title, f"{who.number}-{part.name}", who.revision, part.quantity, part.material, part.stock,
                 tidy(kilograms, significant=4), part.process, "made", note)
        )  # fmt: skip
    for row in bought(e.design, e.sizes, e.stack):
        note = "; ".join([row.note, *shortfalls(e, row.key)])
        rows.append(Item(row.title, "", "", row.quantity, "", "", None, "", "bought", note))
    return rows


def shortfalls(e: Examination, key: str) -> list[str]:
    """What is to be said on a part's line when the design does not hold: its own checks, or that others do not."""
    own = [f"{c.site} {c.check} {factor_text(c)} of {c.target:g}" for c in e.falls_short if c.part == key]
    if own:
        return ["FALLS SHORT: " + ", ".join(own)]
    return [] if e.holds else ["another part FALLS SHORT, see the bill of loads"]


def plain(value: object) -> object:
    """A cell that no spreadsheet takes for a formula."""
    return "'" + value if isinstance(value, str) and value[:1] in ("=", "+", "-", "@", "\t") else value


def parts_list_csv(e: Examination, masses: Mapping[str, float] | None = None) -> str:
    """The parts list as text; a cell is empty where a column does not apply."""
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\n")
    writer.writerow(COLUMNS)
    for row in items(e, masses):
        values = [getattr(row, name) for name in COLUMNS]
        writer.writerow(["" if value is None else plain(value) for value in values])
    return out.getvalue()
