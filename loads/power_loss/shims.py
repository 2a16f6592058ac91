"""Shims under the stop's contact: what thickness sets which seat angle. Exact geometry; mm and rad.

The seated link turns about the crank pin A until its flank lies on the shim, half its width off its axis.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from parts.design import Mechanism
from parts.sizes import StopSizes

METRIC = (0.0, 0.1, 0.2, 0.5, 1.0, 1.5, 2.0, 2.5, 3.0, 4.0, 5.0)  # mm, as sheet is sold; common practice, no source
INCH = tuple(25.4 * t for t in (0.0, 0.005, 0.01, 0.02, 0.03, 0.04, 0.06, 0.08, 0.1, 0.125, 0.15, 0.2))
BEYOND = math.radians(1.0)  # past the seat angles that matter, where the table ends


@dataclass(frozen=True, slots=True)
class Shim:
    """``thickness`` is below zero where as much has to come off the stop instead."""

    thickness: float
    seat: float
    mark: str = ""


def seat_with_shim(m: Mechanism, link_width: float, stop: StopSizes, thickness: float) -> float | None:
    """Seat angle (rad) with a shim of a thickness (mm) on the stop's contact; None where it no longer fits.

    A post's axis S stays where it is, w/2 + D/2 off the link's axis at ``stop_reach``; a shim wrapped round it makes it
    thicker: β = β0 + asin((a + h)/|AS|) − asin(a/|AS|). On a block the thickness counts at ``stop_reach``, square to its
    face, and the shim tapers so that the flank lies flat: β = β0 + asin((w/2)/ρ) − atan((w/2 − h)/d), ρ the distance
    from A to the shim's face there. Source: geometry.
    """
    d, half = m.stop_reach, link_width / 2.0
    if stop.style == "post":
        away = half + stop.diameter / 2.0
        reach = math.hypot(d, away)
        if abs(away + thickness) > reach:
            return None
        return m.seat_angle + math.asin((away + thickness) / reach) - math.asin(away / reach)
    reach = math.hypot(d, half - thickness)
    if half > reach:
        return None
    return m.seat_angle + math.asin(half / reach) - math.atan2(half - thickness, d)


def shim_for(m: Mechanism, link_width: float, stop: StopSizes, seat: float) -> float:
    """Thickness (mm) that sets a seat angle (rad), below zero where the stop has to lose it: the inverse of the above.

    Post: h = |AS| sin(asin(a/|AS|) + Δβ) − a; block: h = d tan Δβ − (w/2)(1/cos Δβ − 1). Source: geometry.
    """
    d, half, turn = m.stop_reach, link_width / 2.0, seat - m.seat_angle
    if stop.style == "post":
        away = half + stop.diameter / 2.0
        return math.hypot(d, away) * math.sin(math.atan2(away, d) + turn) - away
    return d * math.tan(turn) - half * (1.0 / math.cos(turn) - 1.0)


def shims(
    m: Mechanism, link_width: float, stop: StopSizes, steps: tuple[float, ...], marked: dict[str, float | None]
) -> tuple[Shim, ...]:
    """Thicknesses as sheet is sold, from none to a degree past the marked seat angles, and those of the marked ones."""
    named = {name: value for name, value in marked.items() if value is not None}
    top = max([m.seat_angle, *named.values()]) + BEYOND
    rows = [Shim(shim_for(m, link_width, stop, v), v, name) for name, v in named.items()]
    for thickness in steps:
        seat = seat_with_shim(m, link_width, stop, thickness)
        if seat is None or seat > top:
            break
        rows += [] if any(abs(row.thickness - thickness) < 1e-9 for row in rows) else [Shim(thickness, seat)]
    return tuple(sorted(rows, key=lambda row: row.thickness))
