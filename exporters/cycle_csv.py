"""cycle.csv: the whole mechanism over crank angle, winding, frictionless, without shock factor."""

from __future__ import annotations

import numpy as np

from exporters.check_json import tidy
from loads.cycle import trace
from loads.examine import Examination
from loads.linkage import to_machine

COLUMNS = (
    "crank_angle_deg", "stage", "pull_mm", "draw_mm", "chain_tension_N", "crank_torque_Nm", "link_angle_deg",
    "crank_pin_force_N", "crank_pin_fx_N", "crank_pin_fy_N", "stop_force_N", "link_axial_N", "link_bending_Nm",
    "shaft_fx_N", "shaft_fy_N", "sheave_force_N",
)  # fmt: skip


def cycle_csv(e: Examination) -> str:
    """Rows each half degree from 0 to the release and at each event between, sorted, ending in a newline.

    Forces of the pin on the link and of the shaft on the disc are in the machine frame.
    """
    m = e.machine
    s = trace(m, e.figures)
    pin_x, pin_y = to_machine(m, s.pin_x, s.pin_y)
    shaft_x, shaft_y = to_machine(m, s.shaft_x, s.shaft_y)
    columns = (
        np.degrees(s.crank_angle), s.pull, s.draw, s.tension, s.torque / 1000.0, np.degrees(s.link_angle),
        s.pin_force, pin_x, pin_y, s.stop_force, s.link_axial, s.link_bending / 1000.0, shaft_x, shaft_y,
        s.sheave_force,
    )  # fmt: skip
    lines = [",".join(COLUMNS)]
    for seated, angle, *values in zip(s.seated, *columns, strict=True):
        # two events may lie closer together than seven figures tell apart, never closer than six decimals
        first = tidy(float(angle), significant=10)
        rest = (tidy(float(v)) for v in values)
        lines.append(",".join([_cell(first), "seated" if bool(seated) else "free", *map(_cell, rest)]))
    return "\n".join(lines) + "\n"


def _cell(value: float | None) -> str:
    """A number without an exponent, and without decimals that say nothing."""
    return "" if value is None else f"{value:.6f}".rstrip("0").rstrip(".")
