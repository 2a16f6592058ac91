"""Where the link's other side meets the back of the stop: by the outlines that are drawn, in the disc frame of a ccw design.

Lengths in mm, angles in rad. The link is its stadium, an axis between the pins with half its width round it.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from itertools import pairwise
from typing import Any

import numpy as np

from parts.design import Design, Floats
from parts.making import turn_of
from parts.outline import Part, Plate
from parts.shape import polygon
from parts.sizes import Sizes

CELLS = 360  # of the turn in which the contact is looked for
ROUNDS = 60  # of bisection: more than a float has digits
WITHIN = 1e-4  # mm by which a polygon may differ from its arcs


@dataclass(frozen=True, slots=True)
class BackContact:
    """``link_angle`` is λ there; ``reach`` how far along the link from the crank pin; ``place`` in the ccw disc frame."""

    link_angle: float
    reach: float
    place: tuple[float, float]
    on_edge: bool  # the link meets a corner of the stop, not a rounding or a face


def back_contact(parts: Iterable[Part], design: Design, sizes: Sizes) -> BackContact:
    """The first contact behind λ = π, the link pointing outwards, as λ grows: there the stop's back ends its way.

    For a post in closed form λ = β + 2π − γ with γ = 2 atan((w/2 + R)/d): its middle is as far off the axis at both
    contacts, so both lie at the stop reach d. Found for any outline by bisection on the distance of link axis and stop,
    which is w/2 there.
    """
    import shapely

    m, half = design.mechanism, sizes.link.width / 2.0
    area, rounding = _stop(parts, turn_of(design))
    beside = half + rounding

    def axis(angle: Floats) -> Any:
        """The link's axis at link angles (n)."""
        ends = np.empty((angle.size, 2, 2))
        ends[:, 0] = (m.crank_radius, 0.0)
        ends[:, 1, 0] = m.crank_radius - m.link_length * np.cos(angle)
        ends[:, 1, 1] = -m.link_length * np.sin(angle)
        return shapely.linestrings(ends)

    def gap(angle: Floats) -> Floats:
        return np.asarray(shapely.distance(axis(angle), area) - beside)

    x = np.linspace(math.pi, m.seat_angle + 2.0 * math.pi, CELLS + 1)
    first = int(np.argmax(gap(x) <= 0.0)) or CELLS
    low, high = float(x[first - 1]), float(x[first])
    for _ in range(ROUNDS):
        middle = (low + high) / 2.0
        low, high = (middle, high) if float(gap(np.array([middle]))[0]) > 0.0 else (low, middle)
    at, on = (np.asarray(p) for p in shapely.get_coordinates(shapely.shortest_line(axis(np.array([low]))[0], area)))
    reach = math.hypot(at[0] - m.crank_radius, at[1])
    towards = (at - on) / max(math.hypot(*(at - on)), 1e-12)
    place = on + rounding * towards
    return BackContact(low, reach, (float(place[0]), float(place[1])), rounding == 0.0 and not _on_face(area, on, at))


def _stop(parts: Iterable[Part], turn: int) -> tuple[Any, float]:
    """What the stop fills of the disc's plane as an area with a rounding about it: its outline, or a post's axis."""
    import shapely

    part = next(p for p in parts if p.key == "stop")
    place = part.placements[0]
    x, y, _ = place.at
    if not isinstance(part.body, Plate):
        return shapely.Point(x, turn * y), max(step.diameter for step in part.body.steps) / 2.0
    corners = polygon(part.body, WITHIN, containing=True)
    c, s = math.cos(place.angle), math.sin(place.angle)
    corners = corners @ np.array([[c, s], [-s, c]]) + (x, y)
    return shapely.Polygon(corners * (1.0, turn)), 0.0


def _on_face(area: Any, on: Floats, towards: Floats) -> bool:
    """Whether the way from a point on an outline is square to the sides that meet there, so that a face bears."""
    import shapely

    corners = np.asarray(shapely.get_coordinates(area.exterior))
    away = towards - on
    away = away / max(math.hypot(*away), 1e-12)
    for a, b in pairwise(corners):
        along = (b - a) / math.hypot(*(b - a))
        near = shapely.distance(shapely.LineString([a, b]), shapely.Point(on)) < 1e-6
        if near and abs(float(along @ away)) < 1e-6:
            return True
    return False
