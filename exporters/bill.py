"""The bill of loads: as JSON and CSV for programs, as a page for people.

JSON and CSV are SI and hold the same rows as check.json. The page shows the units that the design asks for.
"""

from __future__ import annotations

import csv
import io
from collections.abc import Mapping
from functools import lru_cache
from importlib.resources import files
from typing import TYPE_CHECKING

from exporters.check_json import FORMAT, Row, check_row, design_row, dump, frame_rows, load_rows
from exporters.from_memory import from_memory
from exporters.parts_list import plain
from exporters.shown import shortfall
from loads.examine import Examination

if TYPE_CHECKING:
    from jinja2 import Environment

COLUMNS = (
    "row", "part", "site", "check", "case", "crank_angle_deg", "frame", "fx_N", "fy_N", "fz_N", "mx_Nm", "my_Nm",
    "mz_Nm", "magnitude_N", "demand", "capacity", "unit", "safety_factor", "target", "holds", "method", "source", "note",
)  # fmt: skip


def verdict(e: Examination) -> str:
    """The verdict in a word, and what falls short."""
    if e.holds:
        return f"HOLDS: all {len(e.checks)} checks reach their targets"
    return "FALLS SHORT: " + "; ".join(shortfall(row) for row in e.falls_short)


def bill_document(e: Examination) -> Row:
    """Loads and checks with the verdict and the cautions that belong to them."""
    return {
        "format": FORMAT,
        "design": design_row(e),
        "verdict": verdict(e),
        "holds": bool(e.holds),
        "cautions": list(e.cautions),
        "loads": load_rows(e),
        "frame_forces": frame_rows(e),
        "checks": [check_row(row) for row in e.checks],
        "from_memory": from_memory(e),
    }


def bill_json(e: Examination) -> str:
    return dump(bill_document(e))


def bill_csv(e: Examination) -> str:
    """One flat table, UTF-8. The column ``row`` tells what a line is and which columns it fills:

    - ``verdict``: holds, note (the verdict in words); always the first line
    - ``caution``: note
    - ``load``: part, site, case … magnitude_N, as in check.json
    - ``frame_force``: the same, for what the machine puts into its frame
    - ``check``: part, site, check, case, crank_angle_deg, demand … note, as in check.json

    A cell is empty where a column does not apply and where JSON has null.
    """
    rows: list[Row] = [{"row": "verdict", "holds": bool(e.holds), "note": verdict(e)}]
    rows += [{"row": "caution", "note": text} for text in e.cautions]
    rows += [{"row": "load", **row} for row in load_rows(e)]
    rows += [{"row": "frame_force", **row} for row in frame_rows(e)]
    rows += [{"row": "check", **check_row(row)} for row in e.checks]
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\n")
    writer.writerow(COLUMNS)
    writer.writerows([_cell(row.get(name)) for name in COLUMNS] for row in rows)
    return out.getvalue()


def _cell(value: object) -> object:
    if value is None:
        return ""
    return str(value).lower() if isinstance(value, bool) else plain(value)


def bill_html(e: Examination, masses: Mapping[str, float] | None = None) -> str:
    """The bill as one page that needs nothing beside it: no script, no font, no picture file.

    ``masses`` (kg, by part name) are the solids', where they were made.
    """
    from exporters.bill_page import page  # draws, so only when a page is wanted

    return environment().get_template("bill.html").render(page(e, masses))


@lru_cache(maxsize=1)
def environment() -> Environment:
    """Where pages come from: templates of the package, everything put into them escaped."""
    from jinja2 import Environment, FunctionLoader, StrictUndefined

    return Environment(
        loader=FunctionLoader(lambda name: (files("templates") / name).read_text(encoding="utf-8")),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
        keep_trailing_newline=True,
    )
