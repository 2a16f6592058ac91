"""What follows from a part's records alone: area, volume, mass, distances to edges, thin webs, soundness.

Nothing here needs the solid modeller. Lengths in mm, areas mm², volumes mm³, masses kg, angles rad.
"""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass
from itertools import pairwise
from math import acos, atan2, cos, dist, inf, pi, sin, tau
from typing import NamedTuple

import numpy as np

from parts.outline import Arc, Counterbore, Hole, Line, Part, Plate, Point, Segment, Turned
from parts.segments import (
    TOUCH,
    Floats,
    circle,
    crossings,
    distance,
    length,
    point_at,
    radius,
    ray_hits,
    start_angle,
    steps,
    sweep,
)

Outline = tuple[Segment, ...]
_JOINT = 1e-3  # mm: a tangent line and arc may seem to meet once more this close to their joint

_NODES, _WEIGHTS = (np.asarray(a, dtype=np.float64) for a in np.polynomial.legendre.leggauss(12))


class Moments(NamedTuple):
    """Integrals over an area: of 1, x, y, x², y² and xy (mm², mm³, mm⁴), about the part frame's origin."""

    area: float
    x: float
    y: float
    xx: float
    yy: float
    xy: float


@dataclass(frozen=True, slots=True)
class MassProperties:
    """Volume mm³, mass kg, centre of mass mm, inertia about the z axis kg·mm²; all in the part frame."""

    volume: float
    mass: float
    center: tuple[float, float, float]
    inertia_z: float


@dataclass(frozen=True, slots=True)
class Web:
    """Least material (mm) between two named features; below zero where they run into each other."""

    thickness: float
    one: str
    other: str


def moments(outline: Outline, beyond: float = -inf) -> Moments:
    """Moments of the area inside a closed outline, or of its part with x ≥ ``beyond``.

    Green's theorem: integrals along the boundary over dy, to which cuts along x = ``beyond`` add nothing. Gauss
    quadrature of 12 points a quarter turn makes lines and arcs exact to rounding. A clockwise outline is
    negative.
    """
    total = np.zeros(6)
    floor = 0.0 if beyond == -inf else beyond
    for segment in outline:
        for first, last in _kept(segment, beyond):
            u = first + (last - first) * (_NODES + 1) / 2
            w = _WEIGHTS * (last - first) / 2
            if isinstance(segment, Line):
                (x0, y0), (x1, y1) = segment.start, segment.end
                x, y, dy = x0 + u * (x1 - x0), y0 + u * (y1 - y0), w * (y1 - y0)
            else:
                r, turn = radius(segment), sweep(segment)
                angle = start_angle(segment) + u * turn
                x, y = segment.center[0] + r * np.cos(angle), segment.center[1] + r * np.sin(angle)
                dy = w * r * np.cos(angle) * turn
            out = x - floor
            total += [
                np.sum(out * dy),
                np.sum((x * x - floor * floor) * dy) / 2,
                np.sum(y * out * dy),
                np.sum((x**3 - floor**3) * dy) / 3,
                np.sum(y * y * out * dy),
                np.sum(y * (x * x - floor * floor) * dy) / 2,
            ]
    return Moments(*(float(v) for v in total))


def _kept(segment: Segment, beyond: float) -> list[tuple[float, float]]:
    """Stretches of a segment (as fractions of it) with x ≥ ``beyond``, none longer than a quarter turn."""
    cuts = {0.0, 1.0}
    if isinstance(segment, Line):
        rise = segment.end[0] - segment.start[0]
        if beyond > -inf and rise:
            cuts.add((beyond - segment.start[0]) / rise)
    else:
        turn, first, r = sweep(segment), start_angle(segment), radius(segment)
        quarters = max(1, round(abs(turn) / (pi / 2) + 0.5))
        cuts.update(i / quarters for i in range(1, quarters))
        if abs(beyond - segment.center[0]) < r:
            for angle in (acos((beyond - segment.center[0]) / r), -acos((beyond - segment.center[0]) / r)):
                cuts.update((angle + 2 * pi * k - first) / turn for k in range(-2, 3))
    inside = sorted(c for c in cuts if 0.0 <= c <= 1.0)
    return [
        (low, high)
        for low, high in pairwise(inside)
        if beyond == -inf or point_at(segment, (low + high) / 2)[0] >= beyond
    ]


def _round(feature: Hole | Counterbore) -> Moments:
    """Moments of a full circle, in closed form."""
    (x, y), square = feature.center, feature.diameter**2 / 16
    area = pi * feature.diameter**2 / 4
    return Moments(area, area * x, area * y, area * (x * x + square), area * (y * y + square), area * x * y)


def signed_area(outline: Outline) -> float:
    """Area inside a closed outline, positive when it runs counter-clockwise: the chords' polygon and each arc's segment."""
    twice = 0.0
    for segment in outline:
        (x0, y0), (x1, y1) = segment.start, segment.end
        twice += x0 * y1 - x1 * y0
        if isinstance(segment, Arc):
            turn = sweep(segment)
            twice += radius(segment) ** 2 * (turn - sin(turn))
    return twice / 2


def area_beyond(outline: Outline, x: float) -> float:
    """Area of the part of a counter-clockwise outline on the far side of a line across x."""
    return moments(outline, x).area


def centroid(outline: Outline) -> Point:
    m = moments(outline)
    return (m.x / m.area, m.y / m.area)


def perimeter(outline: Outline) -> float:
    return sum(length(s) for s in outline)


def cut_area(plate: Plate) -> float:
    """Area of a plate as cut: outline less its holes at finished size."""
    return signed_area(plate.outline) - sum(pi * h.diameter**2 / 4 for h in plate.holes)


def _overlap(one: Counterbore | Hole, other: Counterbore | Hole) -> Outline:
    """The area common to two circles, as an outline; empty when they are apart."""
    small, big = sorted((one, other), key=lambda f: f.diameter)
    a, b, apart = small.diameter / 2, big.diameter / 2, dist(one.center, other.center)
    if apart >= a + b:
        return ()
    if apart <= b - a:
        return circle(small.center, small.diameter, small.name)
    along = (apart * apart + a * a - b * b) / (2 * apart)
    half = (a * a - along * along) ** 0.5
    (sx, sy), (bx, by) = small.center, big.center
    ux, uy = (bx - sx) / apart, (by - sy) / apart
    right = (sx + along * ux + half * uy, sy + along * uy - half * ux)
    left = (sx + along * ux - half * uy, sy + along * uy + half * ux)
    return (Arc(right, left, small.center, True, small.name), Arc(left, right, big.center, True, big.name))


def _plate_pieces(plate: Plate, away: int) -> list[tuple[float, Moments, float, float]]:
    """A plate as signed prisms: (sign, moments of the base, height, z of its middle)."""
    t, middle = plate.thickness, away * plate.thickness / 2
    holes = [_round(h) for h in plate.holes]
    pieces = [(1.0, moments(plate.outline), t, middle), *((-1.0, m, t, middle) for m in holes)]
    for i, bore in enumerate(plate.counterbores):
        z = away * (bore.depth / 2 if bore.face == "chain" else t - bore.depth / 2)
        pieces.append((-1.0, _round(bore), bore.depth, z))
        pieces += [(1.0, moments(o), bore.depth, z) for h in plate.holes if (o := _overlap(bore, h))]
        for other in plate.counterbores[:i]:
            if other.face == bore.face and _overlap(bore, other):
                shared = min(bore.depth, other.depth)
                z = away * (shared / 2 if bore.face == "chain" else t - shared / 2)
                pieces.append((1.0, moments(_overlap(bore, other)), shared, z))
    for slot in plate.slots:
        low, high = slot.z_from, min(slot.z_to, t / 2)
        pieces.append((-1.0, moments(plate.outline, slot.x_from), 2 * (high - low), middle))
        for hole in plate.holes:
            gone = moments(circle(hole.center, hole.diameter, hole.name), slot.x_from)
            pieces.append((1.0, gone, 2 * (high - low), middle))
    return pieces


def plate_volume(plate: Plate) -> float:
    """Volume in mm³: outline less holes, counterbores and slots. Exact for a plate that is ``sound``."""
    return sum(sign * m.area * height for sign, m, height, _ in _plate_pieces(plate, 1))


def profile(turned: Turned) -> list[tuple[float, float]]:
    """The turned outside as points (z, radius) in order of z, chamfers included."""
    points: list[tuple[float, float]] = []
    for step in turned.steps:
        r = step.diameter / 2
        points += [(step.z_from, r - step.chamfer_from), (step.z_from + step.chamfer_from, r)]
        points += [(step.z_to - step.chamfer_to, r), (step.z_to, r - step.chamfer_to)]
    return points


def _turned_integrals(turned: Turned) -> tuple[float, float, float]:
    """∫πr² dz, ∫πr² z dz, ∫πr⁴/2 dz of the body: cones between the profile's points, less the bore."""
    volume = first = polar = 0.0
    points = profile(turned)
    for (z0, r0), (z1, r1) in pairwise(points):
        u = (_NODES + 1) / 2
        z, r, w = z0 + u * (z1 - z0), r0 + u * (r1 - r0), _WEIGHTS * (z1 - z0) / 2
        square = r * r - (turned.bore / 2) ** 2
        volume += float(np.sum(pi * square * w))
        first += float(np.sum(pi * square * z * w))
        polar += float(np.sum(pi / 2 * (r**4 - (turned.bore / 2) ** 4) * w))
    return volume, first, polar


def turned_volume(turned: Turned) -> float:
    """Volume in mm³ of a turned part, chamfers and bore taken off."""
    return _turned_integrals(turned)[0]


def volume(part: Part) -> float:
    return plate_volume(part.body) if isinstance(part.body, Plate) else turned_volume(part.body)


def mass(part: Part) -> float:
    """Mass of one part in kg."""
    return volume(part) * part.density * 1e-9


def mass_properties(part: Part) -> MassProperties:
    """Volume, mass, centre of mass and inertia about the part frame's z axis, from the records alone."""
    x = y = 0.0
    if isinstance(part.body, Plate):
        pieces = _plate_pieces(part.body, part.away)
        size = sum(s * m.area * h for s, m, h, _ in pieces)
        x, y = (sum(s * m[i] * h for s, m, h, _ in pieces) / size for i in (1, 2))
        z = sum(s * m.area * h * middle for s, m, h, middle in pieces) / size
        polar = sum(s * (m.xx + m.yy) * h for s, m, h, _ in pieces)
    else:
        size, first, polar = _turned_integrals(part.body)
        z = first / size
    kilograms = part.density * 1e-9
    return MassProperties(size, size * kilograms, (x, y, z), polar * kilograms)


def edge_distance(
    plate: Plate, origin: Point, directions: Floats, *, holes: bool = False, skip: tuple[str, ...] = ()
) -> Floats:
    """Distance (mm) from ``origin`` to the outer outline along each direction (rad, any shape).

    With ``holes``, the plate's other holes count as edges too; those named in ``skip`` do not. Infinite where a
    ray meets nothing. Lines and arcs are met exactly.
    """
    edges: list[Segment] = list(plate.outline)
    if holes:
        edges += [s for h in plate.holes if h.name not in skip for s in circle(h.center, h.diameter, h.name)]
    return ray_hits(edges, origin, np.asarray(directions, dtype=np.float64))


def polygon(shape: Plate | Outline, tolerance: float, containing: bool = False) -> Floats:
    """An outline as a polygon, (n, 2), counter-clockwise, first point not repeated, within ``tolerance`` mm.

    Its corners lie on the outline, so bulging arcs lose a little. With ``containing`` bulging arcs are replaced
    by their tangents and hollow ones by chords: the polygon then holds the whole shape, as a clash sweep wants.
    """
    outline = shape.outline if isinstance(shape, Plate) else shape
    points: list[Point] = []
    for segment in outline:
        points.append(segment.start)
        if isinstance(segment, Line):
            continue
        outside = containing and segment.ccw
        n, r = steps(segment, tolerance, outside), radius(segment)
        first, turn = start_angle(segment), sweep(segment) / n
        if outside:
            r /= cos(turn / 2)
        for i in range(n if outside else n - 1):
            angle = first + turn * (i + (0.5 if outside else 1.0))
            points.append((segment.center[0] + r * cos(angle), segment.center[1] + r * sin(angle)))
    return np.array(points, dtype=np.float64)


def mirrored(outline: Outline) -> Outline:
    """The outline mirrored about the x axis, running counter-clockwise again."""

    def flip(at: Point) -> Point:
        return (at[0], -at[1])

    return tuple(
        Line(flip(s.end), flip(s.start), s.name)
        if isinstance(s, Line)
        else Arc(flip(s.end), flip(s.start), flip(s.center), s.ccw, s.name)
        for s in reversed(outline)
    )


def is_inside(outline: Outline, point: Point) -> bool:
    """Whether a point lies inside a closed outline: the outline turns once round it.

    Seen from the point an arc turns as its chord does, and once more where the point lies between the two.
    """
    turned = 0.0
    for segment in outline:
        (x0, y0), (x1, y1) = segment.start, segment.end
        ax, ay, bx, by = x0 - point[0], y0 - point[1], x1 - point[0], y1 - point[1]
        across = ax * by - ay * bx + 0.0  # a negative zero would count as the other side of the chord
        turned += atan2(across, ax * bx + ay * by)
        if isinstance(segment, Arc) and dist(point, segment.center) < radius(segment):
            between = abs(sweep(segment)) == tau or (across < 0.0) == segment.ccw
            turned += (tau if segment.ccw else -tau) * between
    return abs(turned) > pi


def least_web(plate: Plate) -> tuple[Web, ...]:
    """Material between each two holes, and between each hole and the outline nearest it, thinnest first.

    Counterbores count like holes, except with the holes inside them; those of opposite faces do not meet.
    """
    rounds: list[Hole | Counterbore] = [*plate.holes, *plate.counterbores]
    webs: list[Web] = []
    for i, one in enumerate(rounds):
        for other in rounds[i + 1 :]:
            apart = dist(one.center, other.center)
            nested = apart <= abs(one.diameter - other.diameter) / 2 + TOUCH and type(one) is not type(other)
            opposite = isinstance(one, Counterbore) and isinstance(other, Counterbore) and one.face != other.face
            if not nested and not opposite:
                webs.append(Web(apart - (one.diameter + other.diameter) / 2, one.name, other.name))
        gap, nearest = min(((distance(s, one.center), s) for s in plate.outline), key=lambda found: found[0])
        gap = gap if is_inside(plate.outline, one.center) else -gap
        webs.append(Web(gap - one.diameter / 2, one.name, nearest.name))
    return tuple(sorted(webs, key=lambda w: (w.thickness, w.one, w.other)))


def sound(plate: Plate) -> list[str]:
    """What is wrong with a plate as a shape, each in a sentence; empty when it can be cut and modelled."""
    outline = plate.outline
    faults: list[str] = []
    for i, segment in enumerate(outline):
        after = outline[(i + 1) % len(outline)]
        gap = dist(segment.end, after.start)
        if gap > TOUCH:
            faults.append(f"outline: a gap of {gap:.6g} mm between {segment.name} and {after.name}")
        if isinstance(segment, Arc) and abs(dist(segment.center, segment.end) - radius(segment)) > TOUCH:
            faults.append(f"outline: the ends of {segment.name} are not equally far from its centre")
        whole = isinstance(segment, Arc) and len(outline) == 1
        if dist(segment.start, segment.end) <= TOUCH and not whole:
            faults.append(f"outline: {segment.name} has no length")
    if faults:
        return faults
    if signed_area(outline) <= 0:
        faults.append("outline: runs clockwise")
    for i, one in enumerate(outline):
        for other in outline[i + 1 :]:
            joints = [e for e in (one.start, one.end) for f in (other.start, other.end) if dist(e, f) <= TOUCH]
            for at in crossings(one, other):
                if all(dist(at, joint) > _JOINT for joint in joints):
                    faults.append(f"outline: {one.name} and {other.name} meet at ({at[0]:.4g}, {at[1]:.4g}) mm")
    faults += [
        f"{web.one} and {web.other} run into each other by {-web.thickness:.4g} mm"
        for web in least_web(plate)
        if web.thickness <= 0
    ]
    names = Counter(f.name for f in (*outline, *plate.holes, *plate.counterbores, *plate.slots))
    faults += [f"the name {name} is used twice" for name in sorted(n for n, count in names.items() if count > 1)]
    faults += [
        f"{bore.name} is {bore.depth:.4g} mm deep in a plate of {plate.thickness:.4g} mm"
        for bore in plate.counterbores
        if not 0 < bore.depth < plate.thickness
    ]
    reach = max(x for x, _ in polygon(outline, 0.01)) if plate.slots else 0.0
    faults += [
        f"{slot.name} does not cut the plate, or cuts it off"
        for slot in plate.slots
        if not 0 <= slot.z_from < slot.z_to <= plate.thickness / 2 + TOUCH or slot.x_from >= reach
    ]
    return faults
