"""Pictures of the study of power loss: the turn as a ring of bands, and the trade over the seat angle.

Bands tell themselves apart by fill and hatching, not by colour, and their names stand beside them.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence

from exporters import svg
from exporters.curves import axis, nice_ticks, tick_text
from exporters.shown import angle
from loads.examine import Examination
from loads.power_loss.bands import RUNS_ON, STAYS, UNWINDS
from loads.power_loss.seat import LEAST, SeatRow
from loads.power_loss.study import Band, PowerLoss
from parts.making import turn_of
from parts.outline import Point

_At = Callable[[float, float], Point]  # from angle and radius, or from two values, into the picture

OUTER, INNER = 120.0, 96.0
HATCH = math.radians(2.0)
LEAST_SHOWN = math.radians(0.7)  # a narrower band is drawn this wide
FILLS = {UNWINDS: "hole", STAYS: "disc", RUNS_ON: "dot"}
WIDE, HIGH, LEFT, TOP = 380.0, 150.0, 40.0, 52.0


def fate_ring(e: Examination, study: PowerLoss) -> str:
    """The turn seen from the front, the start dead centre to the right, counted in the direction of rotation."""
    turn = float(turn_of(e.design))

    def at(theta: float, r: float) -> Point:
        return (r * math.cos(theta), -turn * r * math.sin(theta))

    body: list[str] = []
    labels: list[list[svg.Label]] = []
    busy: list[Point] = [at(t * HATCH, r) for t in range(181) for r in (INNER, OUTER)]
    for band in sorted(study.bands, key=lambda b: b.start - b.end):  # narrow ones last, on top
        body += _sector(band, at)
    labels += [_beside(band, at) for band in (study.bands[0], *reversed(study.bands[1:]))]
    events = e.figures.events
    marks = {"catch": float(events.catch), "hold": study.hold, "null": float(events.null), "0°": 0.0}
    for k, (name, theta) in enumerate(marks.items()):
        body.append(svg.line(at(theta, INNER - 14.0), at(theta, OUTER + 4.0), "event"))
        x, y = at(theta, INNER - 18.0)
        word = name if name == "0°" else f"{name} {angle(theta)}°"
        anchor = "end" if x > 0.0 else "start"
        labels.insert(k, [svg.Label(x, y + shift, (word,), anchor) for shift in (0.0, 14.0, -14.0, 28.0, -28.0)])
    # which way the crank angle counts
    body.append(svg.polyline([at(0.5 * math.pi + 0.1 * k, 62.0) for k in range(-5, 6)], "edge"))
    body.append(
        svg.polyline(
            [at(0.5 * math.pi + 0.64, 62.0), at(0.5 * math.pi + 0.5, 66.5), at(0.5 * math.pi + 0.5, 57.5)],
            "axis-head",
            closed=True,
        )
    )
    text = "The turn as a ring, counted from the start dead centre at the right in the direction of rotation. "
    text += " ".join(f"From {angle(b.start)}° to {angle(b.end)}° it {b.fate}." for b in study.bands)
    text += f" Catch {angle(marks['catch'])}°, hold {angle(study.hold)}°, null {angle(marks['null'])}°."
    points = [at(math.radians(k), OUTER + 6.0) for k in range(0, 360, 10)]
    return svg.picture("power-loss-ring", "What happens without drive", text, body, points, svg.settled(labels, busy))


def _sector(band: Band, at: _At) -> list[str]:
    """A piece of the ring: blank where it unwinds, hatched where it stays, solid where it runs on."""
    middle, half = (band.start + band.end) / 2.0, max(band.end - band.start, LEAST_SHOWN) / 2.0
    low, high = middle - half, middle + half
    cuts = max(1, math.ceil((high - low) / HATCH))
    steps = [low + (high - low) * i / cuts for i in range(cuts + 1)]
    ring = [*(at(t, OUTER) for t in steps), *(at(t, INNER) for t in reversed(steps))]
    body = [svg.polyline(ring, FILLS[band.fate], closed=True), svg.polyline(ring, "edge", closed=True)]
    if band.fate == STAYS:
        body += [svg.line(at(t, INNER), at(t, OUTER), "scale") for t in steps]
    elif band.fate == UNWINDS:
        # arrow heads that point back
        count = max(1, round((high - low) / math.radians(40.0)))
        r = (INNER + OUTER) / 2.0
        for i in range(count):
            t = low + (high - low) * (i + 0.5) / count
            tip, spread = at(t - 0.06, r), [at(t + 0.03, r + side * 6.0) for side in (1.0, -1.0)]
            body.append(svg.polyline([tip, *spread], "axis-head", closed=True))
    return body


def _beside(band: Band, at: _At) -> list[svg.Label]:
    """Places for a band's name outside the ring, at its middle first."""
    lines = (band.fate, f"{angle(band.start)}–{angle(band.end)}°")
    found = []
    # the narrow bands at the end lie beside that at the start, so it makes room and they follow each other backwards
    ways = (0.3, 0.4, 0.2, 0.0) if band.start == 0.0 else (0.0, -0.13, -0.26, -0.39, -0.52, 0.13, 0.26)
    for away in ways:
        x, y = at((band.start + band.end) / 2.0 + away, OUTER + 12.0)
        anchor = "middle" if abs(x) < 40.0 else "start" if x > 0.0 else "end"
        low = 0.0 if abs(x) >= 40.0 or y > 0.0 else -svg.LEADING
        found.append(svg.Label(x, y + low, lines, anchor))
    return found


def _width(ends: Point | None) -> float:
    return 0.0 if ends is None else math.degrees(ends[1] - ends[0])


def trade_picture(study: PowerLoss) -> str:
    """Over the seat angle: how wide the band is that does not unwind in the middle, and that in which it fires itself."""
    rows = study.rows
    seats = [math.degrees(row.seat) for row in rows]
    middle = [_width(row.middle) for row in rows]
    firing = [_width(row.outcome.self_firing) for row in rows]
    ticks = nice_ticks(0.0, max(1.0, *middle, *firing))
    across = nice_ticks(seats[0], seats[-1], 9)
    left, right = across[0], across[-1]

    def put(x: float, y: float) -> Point:
        return (LEFT + WIDE * (x - left) / (right - left), TOP + HIGH * (ticks[-1] - y) / ticks[-1])

    body = [svg.label(svg.Label(LEFT, -6.0, ("width of the band, °",)), "small")]
    for tick in ticks:
        x, y = put(left, tick)
        body.append(svg.line((x, y), put(right, tick), "zero" if tick == 0.0 else "grid"))
        body.append(svg.label(svg.Label(x - 5.0, y, (f"{tick:g}",), "end"), "small"))
    body += axis([(put(x, 0.0)[0], tick_text(x)) for x in across], LEFT + WIDE / 2, TOP + HIGH, "seat angle, °")
    body += _marked(rows, put)
    body.append(svg.polyline([put(x, y) for x, y in zip(seats, middle, strict=True)], "curve"))
    body.append(svg.polyline([put(x, y) for x, y in zip(seats, firing, strict=True)], "chain"))
    body += [svg.circle(put(x, y), 2.6, "dot") for x, y in zip(seats, firing, strict=True)]
    labels = []
    for values, name, end in ((middle, "does not unwind in the middle", 0), (firing, "fires itself", -1)):
        x, y = put(seats[end], values[end])
        labels.append(svg.Label(x, y - 12.0, (name,), "start" if end == 0 else "end"))
    text = (
        "Over the seat angle, solid: width of the band in the middle from which the machine does not unwind; dashed with "
        "dots: width of the band from the null to where friction lets the link go, in which it fires itself. "
    )
    text += " ".join(
        f"At {x:.2f}°: {a:.1f}° and {b:.1f}°." for x, a, b in zip(seats, middle, firing, strict=True)
    ).replace("-", "\N{MINUS SIGN}")
    box = [(0.0, -16.0), (LEFT + WIDE + 6.0, TOP + HIGH + 36.0)]
    return svg.picture("power-loss-trade", "What the seat angle trades", text, body, box, labels)


def _marked(rows: Sequence[SeatRow], put: _At) -> list[str]:
    """A line for each seat angle with a name; the names one above the other."""
    body = []
    named = [(math.degrees(row.seat), " and ".join(row.marks)) for row in rows if row.marks]
    for level, (seat, name) in enumerate(named):
        x, bottom = put(seat, 0.0)
        y = TOP - 8.0 - 13.0 * (len(named) - 1 - level)
        word = f"{name} {seat:.2f}°" if LEAST in name else name
        body.append(svg.line((x, y - 6.0), (x, bottom), "event"))
        body.append(svg.label(svg.Label(x - 4.0, y, (word,), "end"), "small"))
    return body
