"""Geometry of one line or arc of an outline: length, points, distance, crossings, rays. In mm and rad."""

from __future__ import annotations

from collections.abc import Sequence
from math import acos, atan2, ceil, cos, dist, hypot, pi, sin, tau

import numpy as np
from numpy.typing import NDArray

from parts.outline import Arc, Line, Point, Segment

Floats = NDArray[np.float64]
TOUCH = 1e-7  # mm: points closer than this are one point


def radius(arc: Arc) -> float:
    return dist(arc.center, arc.start)


def start_angle(arc: Arc) -> float:
    return atan2(arc.start[1] - arc.center[1], arc.start[0] - arc.center[0])


def sweep(arc: Arc) -> float:
    """Angle from start to end, counter-clockwise positive; an arc that ends where it starts is a circle."""
    turn = atan2(arc.end[1] - arc.center[1], arc.end[0] - arc.center[0]) - start_angle(arc)
    if dist(arc.start, arc.end) < TOUCH and abs(turn) < 0.5:
        return tau if arc.ccw else -tau
    turn %= tau
    return turn if arc.ccw else turn - tau


def length(segment: Segment) -> float:
    if isinstance(segment, Line):
        return dist(segment.start, segment.end)
    return abs(sweep(segment)) * radius(segment)


def point_at(segment: Segment, fraction: float) -> Point:
    """The point at a fraction 0…1 of the way from start to end."""
    if isinstance(segment, Line):
        (x0, y0), (x1, y1) = segment.start, segment.end
        return (x0 + fraction * (x1 - x0), y0 + fraction * (y1 - y0))
    angle, r = start_angle(segment) + fraction * sweep(segment), radius(segment)
    return (segment.center[0] + r * cos(angle), segment.center[1] + r * sin(angle))


def _stretch(arc: Arc) -> tuple[float, float]:
    """Where an arc begins (rad) and how far it goes on from there counter-clockwise, whichever way it runs."""
    first, turn = start_angle(arc), sweep(arc)
    return (first + turn, -turn) if turn < 0 else (first, turn)


def covers(arc: Arc, angle: float, slack: float = 0.0) -> bool:
    """Whether a direction (rad) from the centre falls on the arc, give or take ``slack`` mm along it."""
    first, turn = _stretch(arc)
    loose = slack / radius(arc)
    return (angle - first + loose) % tau <= turn + 2 * loose


def distance(segment: Segment, point: Point) -> float:
    """Least distance from a point to the segment."""
    if isinstance(segment, Line):
        (x0, y0), (x1, y1) = segment.start, segment.end
        dx, dy = x1 - x0, y1 - y0
        square = dx * dx + dy * dy
        u = ((point[0] - x0) * dx + (point[1] - y0) * dy) / square if square else 0.0
        return dist(point, point_at(segment, min(1.0, max(0.0, u))))
    out = dist(point, segment.center)
    if out < TOUCH:
        return radius(segment)
    if covers(segment, atan2(point[1] - segment.center[1], point[0] - segment.center[0])):
        return abs(out - radius(segment))
    return min(dist(point, segment.start), dist(point, segment.end))


def circle(center: Point, diameter: float, name: str) -> tuple[Segment, ...]:
    """A full circle as an outline of one arc."""
    at = (center[0] + diameter / 2, center[1])
    return (Arc(at, at, center, True, name),)


def steps(arc: Arc, tolerance: float, outside: bool = False) -> int:
    """How many chords (or, ``outside``, tangents) keep an arc within ``tolerance`` mm."""
    r = radius(arc)
    sagitta = 1 / (1 + tolerance / r) if outside else max(0.0, 1 - tolerance / r)
    return max(1, ceil(abs(sweep(arc)) / max(2 * acos(sagitta), 1e-6)), ceil(abs(sweep(arc)) / (pi / 2)))


def ray_hits(segments: Sequence[Segment], origin: Point, directions: Floats) -> Floats:
    """Distance from ``origin`` along each direction (rad, any shape) to the nearest segment; infinite where all are missed.

    All segments of one sort are met at once, segments by rays. Whole circles need no look at where on them a ray falls.
    """
    lines, rounds, arcs = _sorted_out(segments)
    flat = np.ravel(directions)
    dx, dy = np.cos(flat), np.sin(flat)
    best = np.full(flat.shape, np.inf)
    with np.errstate(divide="ignore", invalid="ignore"):
        if lines:
            best = np.minimum(best, _line_hits(lines, origin, dx, dy).min(axis=0))
        if rounds:
            near, far = _circle_hits(rounds, origin, dx, dy)
            best = np.minimum(best, np.where(near > TOUCH, near, np.where(far > TOUCH, far, np.inf)).min(axis=0))
        if arcs:
            for reach in _circle_hits(arcs, origin, dx, dy):
                on = (reach > TOUCH) & _on_arcs(arcs, origin, reach * dx, reach * dy)
                best = np.minimum(best, np.where(on, reach, np.inf).min(axis=0))
    return best.reshape(np.shape(directions))


def _sorted_out(segments: Sequence[Segment]) -> tuple[list[Line], list[Arc], list[Arc]]:
    """Lines, whole circles and other arcs."""
    lines: list[Line] = []
    rounds: list[Arc] = []
    arcs: list[Arc] = []
    for segment in segments:
        if isinstance(segment, Line):
            lines.append(segment)
        else:
            (rounds if abs(sweep(segment)) == tau else arcs).append(segment)
    return lines, rounds, arcs


def _columns(rows: list[tuple[float, ...]]) -> Floats:
    """One column (segments, 1) for each place in the rows, to go with rays."""
    return np.array(rows, dtype=np.float64).T[:, :, None]


def _line_hits(lines: Sequence[Line], origin: Point, dx: Floats, dy: Floats) -> Floats:
    """How far along each ray each line is met, (lines, rays); infinite where it is missed."""
    x0, y0, x1, y1 = _columns([(*line.start, *line.end) for line in lines])
    px, py, ex, ey = x0 - origin[0], y0 - origin[1], x1 - x0, y1 - y0
    span = np.hypot(ex, ey)
    slack = TOUCH / np.where(span > 0.0, span, np.inf)
    across = dx * ey - dy * ex
    s, u = (px * ey - py * ex) / across, (px * dy - py * dx) / across
    hit = (np.abs(across) > 1e-14 * span) & (s > TOUCH) & (u >= -slack) & (u <= 1 + slack)
    return np.where(hit, s, np.inf)


def _circle_hits(arcs: Sequence[Arc], origin: Point, dx: Floats, dy: Floats) -> tuple[Floats, Floats]:
    """How far along each ray each arc's whole circle is met, first and last, (arcs, rays); NaN where it is missed."""
    x, y, r = _columns([(*arc.center, radius(arc)) for arc in arcs])
    ox, oy = origin[0] - x, origin[1] - y
    b, c = dx * ox + dy * oy, ox * ox + oy * oy - r**2
    root = np.sqrt(b * b - c)
    return -b - root, -b + root


def _on_arcs(arcs: Sequence[Arc], origin: Point, x: Floats, y: Floats) -> NDArray[np.bool_]:
    """Whether points (arcs, rays), given from ``origin``, lie on their arc, of whose circle they are."""
    cx, cy, first, turn, loose = _columns([(*arc.center, *_stretch(arc), TOUCH / radius(arc)) for arc in arcs])
    angle = np.arctan2(origin[1] - cy + y, origin[0] - cx + x)
    return np.asarray((angle - first + loose) % tau <= turn + 2 * loose)


def crossings(one: Segment, other: Segment) -> list[Point]:
    """Points that two segments share; of a stretch that they share, its middle."""
    if isinstance(one, Line) and isinstance(other, Line):
        return _line_line(one, other)
    if isinstance(one, Line):
        assert isinstance(other, Arc)
        return _line_arc(one, other)
    if isinstance(other, Line):
        return _line_arc(other, one)
    return _arc_arc(one, other)


def _line_line(a: Line, b: Line) -> list[Point]:
    ax, ay = a.end[0] - a.start[0], a.end[1] - a.start[1]
    bx, by = b.end[0] - b.start[0], b.end[1] - b.start[1]
    wx, wy = b.start[0] - a.start[0], b.start[1] - a.start[1]
    la, lb = hypot(ax, ay), hypot(bx, by)
    across = ax * by - ay * bx
    if abs(across) > 1e-12 * la * lb:
        u, v = (wx * by - wy * bx) / across, (wx * ay - wy * ax) / across
        on = -TOUCH <= u * la <= la + TOUCH and -TOUCH <= v * lb <= lb + TOUCH
        return [point_at(a, u)] if on else []
    if abs(wx * ay - wy * ax) > TOUCH * la:
        return []
    first = (wx * ax + wy * ay) / la
    last = first + (bx * ax + by * ay) / la
    low, high = max(0.0, min(first, last)), min(la, max(first, last))
    return [point_at(a, (low + high) / 2 / la)] if high - low > -TOUCH else []


def _line_arc(line: Line, arc: Arc) -> list[Point]:
    span = length(line)
    ux, uy = (line.end[0] - line.start[0]) / span, (line.end[1] - line.start[1]) / span
    ox, oy = line.start[0] - arc.center[0], line.start[1] - arc.center[1]
    along, off = -(ux * ox + uy * oy), abs(ux * oy - uy * ox)
    r = radius(arc)
    if off > r + TOUCH:
        return []
    half = max(0.0, r * r - off * off) ** 0.5
    found: list[Point] = []
    for s in (along - half, along + half):
        x, y = line.start[0] + s * ux, line.start[1] + s * uy
        on = -TOUCH <= s <= span + TOUCH
        if on and covers(arc, atan2(y - arc.center[1], x - arc.center[0]), TOUCH):
            found.append((x, y))
    return found


def _arc_arc(a: Arc, b: Arc) -> list[Point]:
    ra, rb, apart = radius(a), radius(b), dist(a.center, b.center)
    if apart < TOUCH:
        if abs(ra - rb) > TOUCH:
            return []
        tests = [point_at(a, f) for f in (0.0, 0.5, 1.0)] + [point_at(b, f) for f in (0.0, 0.5, 1.0)]
    else:
        if apart > ra + rb + TOUCH or apart < abs(ra - rb) - TOUCH:
            return []
        along = (apart * apart + ra * ra - rb * rb) / (2 * apart)
        half = max(0.0, ra * ra - along * along) ** 0.5
        ux, uy = (b.center[0] - a.center[0]) / apart, (b.center[1] - a.center[1]) / apart
        tests = [
            (a.center[0] + along * ux - side * half * uy, a.center[1] + along * uy + side * half * ux)
            for side in (-1, 1)
        ]

    def on(arc: Arc, at: Point) -> bool:
        return covers(arc, atan2(at[1] - arc.center[1], at[0] - arc.center[0]), TOUCH)

    return [at for at in tests if on(a, at) and on(b, at)]
