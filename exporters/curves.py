"""The cycle as two curves over crank angle, torque and chain tension, with the events marked."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Sequence

from exporters import svg
from exporters.shown import Shown, angle
from loads.cycle import trace
from loads.examine import Examination
from parts.design import Floats
from parts.outline import Point

Across = Callable[[float], float]  # from crank angle (rad), or what else is drawn over, to x in the picture

WIDE, HIGH = 400.0, 120.0
LEFT, TOP, BETWEEN = 46.0, 66.0, 34.0


def nice_ticks(low: float, high: float, most: int = 5) -> list[float]:
    """Round numbers from at or below ``low`` to at or above ``high``."""
    span = max(high - low, 1e-9) / (most - 1)
    decade = 10.0 ** math.floor(math.log10(span))
    step = next(k * decade for k in (1.0, 2.0, 2.5, 5.0, 10.0) if k * decade >= span * (1 - 1e-9))
    first, last = math.floor(low / step + 1e-9), math.ceil(high / step - 1e-9)
    return [step * i for i in range(first, last + 1)]


def cycle_picture(e: Examination) -> str:
    """Torque above, tension below, one axis of crank angle; free and seated stage, peaks and events marked."""
    shown, f, at = Shown(e.design.identity.units), e.figures, e.figures.events
    s = trace(e.machine, f, math.radians(1.0))
    end = float(at.release)

    def x_of(theta: float) -> float:
        return LEFT + WIDE * theta / end

    torque = [shown.value(float(v), "torque") for v in s.torque]
    tension = [shown.value(float(v), "force") for v in s.tension]
    bottom = TOP + 2 * HIGH + BETWEEN
    body = _events(e, x_of, bottom)
    body += panel(s.crank_angle, torque, x_of, TOP, f"torque on the disc, {shown.unit('torque')}", _peaks(e, shown))
    most = ((float(f.largest_tension_at), shown.value(float(f.largest_tension), "force")),)
    body += panel(
        s.crank_angle,
        tension,
        x_of,
        TOP + HIGH + BETWEEN,
        f"{e.design.far_end.noun} tension, {shown.unit('force')}",
        most,
    )
    marks = range(0, int(math.degrees(end)) + 1, 60)
    body += axis([(x_of(math.radians(mark)), f"{mark}°") for mark in marks], LEFT + WIDE / 2, bottom, "crank angle")
    text = (
        f"The torque rises to {shown.quantity(float(f.first_peak), 'torque')} at {angle(float(f.first_peak_at))}°, falls to "
        f"{shown.quantity(float(f.middle_least), 'torque')} at {angle(float(f.middle_least_at))}°, rises to "
        f"{shown.quantity(float(f.second_peak), 'torque')} at {angle(float(f.second_peak_at))}° and is "
        f"{shown.quantity(float(f.hold_torque), 'torque')} at the hold, {angle(float(at.hold))}°. The tension is largest, "
        f"{shown.quantity(float(f.largest_tension), 'force')}, at {angle(float(f.largest_tension_at))}°. "
        f"Catch {angle(float(at.catch))}°, null {angle(float(at.null))}°, release {angle(float(at.release))}°."
    )
    box = [(0.0, 0.0), (LEFT + WIDE + 6.0, bottom + 36.0)]
    return svg.picture("cycle", f"Torque and {e.design.far_end.noun} tension over crank angle", text, body, box)


def _peaks(e: Examination, shown: Shown) -> tuple[Point, ...]:
    f = e.figures
    pairs = ((f.first_peak_at, f.first_peak), (f.middle_least_at, f.middle_least), (f.second_peak_at, f.second_peak))
    return tuple((float(a), shown.value(float(v), "torque")) for a, v in pairs)


def _events(e: Examination, x_of: Across, bottom: float) -> list[str]:
    """A line for each event with its name to the left of it; the last three stand close together, the last highest."""
    at = e.figures.events
    late = sorted((float(v), name) for name, v in (("hold", at.hold), ("null", at.null), ("release", at.release)))[::-1]
    body = []
    for row, (theta, name) in enumerate([*late, (float(at.catch), "catch")]):
        x, y = x_of(theta), 9.0 + 14.0 * min(row, 2)
        body.append(svg.line((x, y - 6.0), (x, bottom), "event"))
        body.append(svg.label(svg.Label(x - 4.0, y, (f"{name} {angle(theta)}°",), "end"), "small"))
    return body


def panel(
    across: Floats, values: Sequence[float], x_of: Across, top: float, name: str, marks: tuple[Point, ...]
) -> list[str]:
    """One curve over ``across`` with its axis; ``marks`` are (across, value) of what is worth a dot."""
    ticks = nice_ticks(min(0.0, *values), max(values))
    low, high = ticks[0], ticks[-1]

    def y_of(value: float) -> float:
        return top + HIGH * (high - value) / (high - low)

    body = [svg.label(svg.Label(LEFT, top - 12.0, (name,)), "small")]
    for tick in ticks:
        body.append(svg.line((LEFT, y_of(tick)), (LEFT + WIDE, y_of(tick)), "zero" if tick == 0.0 else "grid"))
        body.append(svg.label(svg.Label(LEFT - 5.0, y_of(tick), (tick_text(tick),), "end"), "small"))
    body.append(svg.polyline([(x_of(float(a)), y_of(v)) for a, v in zip(across, values, strict=True)], "curve"))
    for a, value in marks:
        body.append(svg.circle((x_of(a), y_of(value)), 3.4, "load-head"))
    return body


def axis(ticks: Iterable[tuple[float, str]], middle: float, bottom: float, name: str) -> list[str]:
    """What lies under the curves: ticks at x with their text, and what is drawn over."""
    body = []
    for x, text in ticks:
        body.append(svg.line((x, bottom), (x, bottom + 4.0), "axis"))
        body.append(svg.label(svg.Label(x, bottom + 13.0, (text,), "middle"), "small"))
    return [*body, svg.label(svg.Label(middle, bottom + 29.0, (name,), "middle"), "small")]


def tick_text(value: float) -> str:
    """A tick's number, thousands as k so that it fits beside the axis."""
    number, sign = abs(value), "\N{MINUS SIGN}" if value < 0 else ""
    return f"{sign}{number / 1000:g}k" if number >= 10_000 else f"{sign}{number:g}"
