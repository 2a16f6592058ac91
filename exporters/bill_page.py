"""What the bill's page says, as plain values for its template: every number is text already, every picture markup."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from exporters import svg
from exporters.chain_rows import chain_values
from exporters.check_json import FRAME, degrees
from exporters.curves import cycle_picture
from exporters.from_memory import from_memory
from exporters.mechanism_picture import frame_picture, mechanism_picture
from exporters.part_pictures import part_picture, row_text
from exporters.parts_list import items
from exporters.shown import TITLES, Shown, angle, factor_text, figures
from exporters.site_places import made, worst_rows
from exporters.studies.registry import study_sections
from exporters.summary import worst_of_each
from loads.examine import Examination
from loads.records import Check, LoadRow
from parts.design import Assumed
from parts.quantities import show

GOVERNING, TIGHTEST = 3, 2
ONE_SIDE = ("crank_disc", "swing_link", "stop", "crank_pin", "chain_pin")  # drawn as they are behind the chain
BAR_ENDS_AT = 3.0  # factor over target at which the margin bar is full

Values = dict[str, Any]


def page(e: Examination, masses: Mapping[str, float] | None = None) -> Values:
    """Everything that the template asks for."""
    shown = Shown(e.design.identity.units)
    at = e.figures.events
    return {
        "identity": e.design.identity,
        "digest": e.design.digest[:12],
        "mechanism": e.design.mechanism,
        "stack": e.stack,
        "targets": e.design.targets,
        "units": {kind: shown.unit(kind) for kind in ("length", "force", "torque", "energy", "mass")},
        "cautions": e.cautions,
        "holds": e.holds,
        "count": len(e.checks),
        "falls_short": [check_values(row, shown) for row in e.falls_short],
        "governing": [check_values(row, shown) for row in under_load(e)[:GOVERNING]],
        "tightest": [check_values(row, shown) for row in of_shape(e)[:TIGHTEST]],
        "key_figures": key_figures(e),
        "curve": svg.markup(cycle_picture(e)),
        "positions": [
            {
                "name": name,
                "angle": angle(float(theta)),
                "picture": svg.markup(mechanism_picture(e, f"at-{name}", name, float(theta))),
            }
            for name, theta in (("catch", at.catch), ("hold", at.hold))
        ],
        "sections": [_section(e, key, shown) for key in section_keys(e)],
        "frame": {
            "picture": svg.markup(frame_picture(e)),
            "captions": [row_text(e, row) for row in worst_rows(e, FRAME)],
            "rows": _load_values(e, FRAME, shown),
        },
        "items": [{"item": row, "mass": _mass(row.mass_kg, shown)} for row in items(e, masses)],
        "assumed": [_assumed(row, shown) for row in e.assumed],
        "chain": chain_values(e),
        "studies": study_sections(e),
        "memory": from_memory(e),
    }


def under_load(e: Examination) -> list[Check]:
    """Checks that a load has a part in, the least margin first."""
    return worst_of_each([row for row in e.checks if row.crank_angle is not None and row.safety_factor is not None])


def of_shape(e: Examination) -> list[Check]:
    """Checks of fit and room, the least margin first."""
    return [row for row in e.checks if row.crank_angle is None and row.safety_factor is not None and not row.case]


def section_keys(e: Examination) -> list[str]:
    """Parts that have loads or checks: made ones in the order of the parts list, then the others as they come."""
    loaded = [row.part for row in e.loads if row.part != FRAME]
    checked = [row.part for row in e.checks]
    known = {*loaded, *checked}
    first = [part.key for part in e.parts if part.key in known]
    return list(dict.fromkeys([*first, *loaded, *checked]))


def part_title(e: Examination, key: str) -> str:
    """What people call a part, without its hand."""
    part = made(e, key)
    if part is not None:
        return part.title.split(",")[0]
    return TITLES.get(key, key.replace("_", " ").capitalize())


def _section(e: Examination, key: str, shown: Shown) -> Values:
    picture = part_picture(e, key)
    part = made(e, key)
    return {
        "key": key,
        "title": part_title(e, key),
        "made": part,
        "twin": len(e.stack.sides) > 1 and key in ONE_SIDE,
        "picture": None if picture is None else svg.markup(picture),
        "captions": [row_text(e, row) for row in worst_rows(e, key)],
        "rows": _load_values(e, key, shown),
        "checks": [check_values(row, shown) for row in e.checks if row.part == key],
    }  # fmt: skip


def _load_values(e: Examination, key: str, shown: Shown) -> list[Values]:
    worst = worst_rows(e, key)
    return [_load(row, shown, row in worst and _loaded(row)) for row in e.loads if row.part == key]


def _loaded(row: LoadRow) -> bool:
    return any((*row.force, *row.moment))


def _load(row: LoadRow, shown: Shown, worst: bool) -> Values:
    return {
        "site": row.site,
        "case": row.case,
        "angle": angle(row.crank_angle),
        "frame": row.frame,
        "force": [shown.number(v, "force") for v in row.force],
        "moment": [shown.number(v, "torque") for v in row.moment],
        "magnitude": shown.number(row.magnitude, "force"),
        "worst": worst,
    }


def check_values(row: Check, shown: Shown) -> Values:
    """A check as the page shows it; ``bar`` is how far the margin bar reaches, 0 to 1."""
    demand, capacity, unit = shown.check(row)
    return {
        "part": row.part,
        "site": row.site,
        "check": row.check,
        "case": row.case,
        "angle": None if row.crank_angle is None else angle(row.crank_angle),
        "demand": demand,
        "capacity": capacity,
        "unit": unit,
        "factor": factor_text(row),
        "target": f"{row.target:g}",
        "holds": row.holds,
        "bar": min(row.margin, BAR_ENDS_AT) / BAR_ENDS_AT,
        "beyond": row.margin > BAR_ENDS_AT,
        "method": row.method,
        "source": row.source,
        "note": row.note,
    }


def key_figures(e: Examination) -> list[tuple[str, str, str]]:
    """Name, value with unit, and where in the turn; the whole mechanism, frictionless, without shock factor."""
    f, at, s = e.figures, e.figures.events, Shown(e.design.identity.units)

    def row(name: str, value: Any, kind: str, where: Any = None) -> tuple[str, str, str]:
        return name, s.quantity(float(value), kind), "" if where is None else f"{angle(float(where))}°"

    def event(name: str, theta: Any) -> tuple[str, str, str]:
        return name, "", f"{angle(float(theta), 2)}°"

    start = figures(float(degrees(float(e.machine.start_direction)) or 0.0))
    noun = e.design.far_end.noun
    return [
        ("start dead centre, direction of the crank pin in the machine frame", f"{start}°", "0°"),
        event("catch: the stop takes the link", at.catch),
        event("hold: where the machine waits", at.hold),
        event("null: the torque changes sign", at.null),
        event("release: the link leaves its stop", at.release),
        row("first torque peak", f.first_peak, "torque", f.first_peak_at),
        row("least torque between the peaks", f.middle_least, "torque", f.middle_least_at),
        row("second torque peak", f.second_peak, "torque", f.second_peak_at),
        row("torque at the hold", f.hold_torque, "torque", at.hold),
        row("mean torque from 0 to the hold", f.mean_torque, "torque"),
        row(f"{noun} pulled at the hold", f.pull_at_hold, "length", at.hold),
        row("spring drawn at the hold", f.draw_at_hold, "length", at.hold),
        row("energy stored at the hold", f.stored_energy, "energy", at.hold),
        row(f"largest {noun} tension", f.largest_tension, "force", f.largest_tension_at),
        row("largest crank pin force", f.largest_crank_pin, "force", f.largest_crank_pin_at),
        row("largest stop force", f.largest_stop, "force", f.largest_stop_at),
        row("largest bending of the link", f.largest_link_bending, "torque", f.largest_link_bending_at),
    ]


def _assumed(row: Assumed, shown: Shown) -> Values:
    return {"key": row.key, "value": show(row.value, row.quantity, shown.units), "why": row.why}


def _mass(kilograms: float | None, shown: Shown) -> str:
    return "" if kilograms is None else shown.number(kilograms, "mass", 3)
