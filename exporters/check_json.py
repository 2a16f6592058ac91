"""check.json: what ``check --json`` prints and ``build`` writes. Plain records in, plain dictionaries out.

Light on purpose: ``check`` imports it, so nothing here draws, renders or models. SI with the unit in each name; six
decimals or seven significant figures, whichever is coarser, so that a rounding remnant comes out as 0.
"""

from __future__ import annotations

import json
import math
from collections.abc import Mapping, Sequence
from typing import Any

from loads.examine import Examination
from loads.records import Check, LoadRow
from parts.design import Assumed
from parts.quantities import Units, show

FORMAT = 1
FRAME = "frame"  # the part whose rows are what the machine puts into its frame
NO_ROUNDING = 15  # decimals that keep all a float has, for ratios of any size

Row = dict[str, Any]


def tidy(value: float, decimals: int = 6, significant: int = 7) -> float | None:
    """A number as it is printed: None where it is not finite, and zero without a sign."""
    number = float(value)
    if not math.isfinite(number):
        return None
    number = round(number, decimals)
    if number == 0.0:
        return 0.0
    return round(number, significant - 1 - math.floor(math.log10(abs(number))))


def degrees(angle: float | None) -> float | None:
    """A crank angle or direction (rad) in degrees, as printed."""
    return None if angle is None else tidy(math.degrees(angle))


def in_moments(value: float, unit: str) -> tuple[float, str]:
    """A check's number with its unit as it leaves: moments in N·m as everywhere in the output, the rest as it is."""
    return (value / 1000.0, "N·m") if unit == "N·mm" else (value, unit)


def load_row(row: LoadRow) -> Row:
    """One row of the loads, N and N·m."""
    fx, fy, fz = (tidy(f) for f in row.force)
    mx, my, mz = (tidy(m / 1000.0) for m in row.moment)
    return {
        "part": row.part, "site": row.site, "case": row.case, "crank_angle_deg": degrees(row.crank_angle),
        "frame": row.frame, "fx_N": fx, "fy_N": fy, "fz_N": fz, "mx_Nm": mx, "my_Nm": my, "mz_Nm": mz,
        "magnitude_N": tidy(row.magnitude),
    }  # fmt: skip


def check_row(row: Check) -> Row:
    """One row of the checks; no demand gives a factor of None, and holds."""
    demand, unit = in_moments(row.demand, row.unit)
    capacity, _ = in_moments(row.capacity, row.unit)
    factor = row.safety_factor
    return {
        "part": row.part, "site": row.site, "check": row.check, "case": row.case,
        "crank_angle_deg": degrees(row.crank_angle), "demand": tidy(demand, NO_ROUNDING),
        "capacity": tidy(capacity, NO_ROUNDING), "unit": unit,
        "safety_factor": None if factor is None else tidy(factor, NO_ROUNDING), "target": tidy(row.target),
        "holds": bool(row.holds), "method": row.method, "source": row.source, "note": row.note,
    }  # fmt: skip


def load_rows(e: Examination) -> list[Row]:
    """The loads on the parts; what goes into the frame is in :func:`frame_rows`."""
    return [load_row(row) for row in e.loads if row.part != FRAME]


def frame_rows(e: Examination) -> list[Row]:
    """Forces and moments that the machine puts into its frame, machine frame."""
    return [load_row(row) for row in e.loads if row.part == FRAME]


def assumed_row(row: Assumed, units: Units) -> Row:
    """A default that was used; its value is what the design file would say (TOML: text for a quantity, else a number)."""
    value: float | int | str | None
    if isinstance(row.value, str):
        value = row.value
    elif row.quantity == "count":
        value = int(row.value)
    elif row.quantity == "number":
        value = tidy(row.value, NO_ROUNDING)
    else:
        value = show(row.value, row.quantity, units)
    return {"key": row.key, "value": value, "why": row.why}


def design_row(e: Examination) -> Row:
    who = e.design.identity
    return {"title": who.title, "number": who.number, "revision": who.revision, "digest": e.design.digest}


def event_row(e: Examination) -> Row:
    """Crank angles of what happens in the cycle, and the machine-frame direction in which it starts; degrees."""
    figures, at = e.figures, e.figures.events
    return {
        "start_direction_deg": degrees(float(e.machine.start_direction)),
        "catch_deg": degrees(float(at.catch)),
        "null_deg": degrees(float(at.null)),
        "release_deg": degrees(float(at.release)),
        "hold_deg": degrees(float(at.hold)),
        "first_peak_deg": degrees(float(figures.first_peak_at)),
        "second_peak_deg": degrees(float(figures.second_peak_at)),
        "middle_least_deg": degrees(float(figures.middle_least_at)),
    }


def cycle_row(e: Examination) -> Row:
    """Figures of the whole mechanism: winding, frictionless, without shock factor."""
    c = e.figures
    return {
        "pull_at_hold_mm": tidy(float(c.pull_at_hold)),
        "draw_at_hold_mm": tidy(float(c.draw_at_hold)),
        "stored_energy_J": tidy(float(c.stored_energy) / 1000.0),
        "first_peak_Nm": tidy(float(c.first_peak) / 1000.0),
        "second_peak_Nm": tidy(float(c.second_peak) / 1000.0),
        "middle_least_Nm": tidy(float(c.middle_least) / 1000.0),
        "mean_torque_Nm": tidy(float(c.mean_torque) / 1000.0),
        "hold_torque_Nm": tidy(float(c.hold_torque) / 1000.0),
        "largest_tension_N": tidy(float(c.largest_tension)),
        "largest_crank_pin_N": tidy(float(c.largest_crank_pin)),
        "largest_stop_N": tidy(float(c.largest_stop)),
        "largest_link_bending_Nm": tidy(float(c.largest_link_bending) / 1000.0),
    }


def check_document(e: Examination) -> Row:
    """Everything that is known of the machine, in the order in which it is printed."""
    from exporters.chain_rows import adjustment_rows, chain_row, far_end_row  # here, for they round by this module
    from exporters.from_memory import from_memory
    from exporters.studies.registry import study_rows

    units = e.design.identity.units
    return {
        "format": FORMAT,
        "design": design_row(e),
        "events": event_row(e),
        "cycle": cycle_row(e),
        "loads": load_rows(e),
        "frame_forces": frame_rows(e),
        "checks": [check_row(row) for row in e.checks],
        "assumed": [assumed_row(row, units) for row in e.assumed],
        "from_memory": from_memory(e),
        "far_end": far_end_row(e),
        "chain": chain_row(e),
        "adjustment": adjustment_rows(e),
        "studies": study_rows(e),
        "cautions": list(e.cautions),
        "holds": bool(e.holds),
    }


def dump(document: Mapping[str, Any]) -> str:
    """JSON text with one record of a list a line; the same bytes each time, ASCII only so that any terminal takes it.

    Raises ``ValueError`` for a number that JSON cannot hold: those have to be None before they come here.
    """
    entries = [f"  {_json(key)}: {_entry(value)}" for key, value in document.items()]
    return "{\n" + ",\n".join(entries) + "\n}\n"


def _entry(value: Any) -> str:
    if isinstance(value, Mapping) and value:
        return "{\n" + ",\n".join(f"    {_json(k)}: {_json(v)}" for k, v in value.items()) + "\n  }"
    if isinstance(value, Sequence) and not isinstance(value, str) and value:
        return "[\n" + ",\n".join(f"    {_json(v)}" for v in value) + "\n  ]"
    return _json(value)


def _json(value: Any) -> str:
    return json.dumps(value, allow_nan=False)
