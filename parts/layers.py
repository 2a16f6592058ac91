"""The machine as layers along z: what each part fills of the plane between two heights, in its mover's frame.

For the clash sweep. Round things stay circles, so that contacts are exact; plates are polygons with their holes, and
outlines never smaller than the part. Lengths in mm.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise
from typing import Any

import numpy as np

from parts.assembly import occurrences
from parts.design import Design, Floats
from parts.outline import Counterbore, Hole, Part, Placement, Plate
from parts.segments import circle
from parts.shape import polygon
from parts.sizes import Sizes

TOLERANCE = 0.02  # mm by which a polygon may differ from its arcs


@dataclass(frozen=True, eq=False)
class Round:
    """A full circle."""

    x: float
    y: float
    radius: float

    @property
    def bounds(self) -> tuple[float, float, float]:
        """Centre and radius of a circle around it."""
        return self.x, self.y, self.radius


@dataclass(frozen=True, eq=False)
class Shape:
    """A polygon with holes: ``area`` is shapely's; ``rings`` its outer ring and holes, each (n, 2)."""

    area: Any

    @cached_property
    def rings(self) -> tuple[Floats, tuple[Floats, ...]]:
        import shapely

        rings = [self.area.exterior, *self.area.interiors]
        outer, *inner = (np.asarray(shapely.get_coordinates(ring))[:-1] for ring in rings)
        return outer, tuple(inner)

    @cached_property
    def bounds(self) -> tuple[float, float, float]:
        outer = self.rings[0]
        middle = (outer.min(axis=0) + outer.max(axis=0)) / 2
        return float(middle[0]), float(middle[1]), float(np.hypot(*(outer - middle).T).max())


@dataclass(frozen=True, eq=False)
class Strip:
    """The straight chain: from ``x_from`` along x to where it meets the sheave, which differs from pose to pose."""

    x_from: float
    half: float


Geometry = Round | Shape | Strip


@dataclass(frozen=True, slots=True)
class Layer:
    key: str  # of the part, or what the far end is called, or "sheave"
    name: str  # of the copy
    mover: str
    z_low: float
    z_high: float
    geometry: Geometry


def part_layers(part: Part) -> list[Layer]:
    """All layers of all copies. Copies at the same place in the plane share their geometry."""
    shared: dict[tuple[str, float, float, float, int], Geometry] = {}
    found = []
    for name, place in zip(occurrences(part), part.placements, strict=True):
        key = (place.mover, *place.at[:2], place.angle)
        for i, (low, high, build) in enumerate(_slices(part)):
            at = (*key, i)
            if at not in shared:
                shared[at] = _moved(build, place)
            found.append(Layer(part.key, name, place.mover, place.at[2] + low, place.at[2] + high, shared[at]))
    return found


def _slices(part: Part) -> list[tuple[float, float, Any]]:
    """(z_low, z_high, radius of a circle or shapely area) in the part frame."""
    if not isinstance(part.body, Plate):
        return [(s.z_from, s.z_to, s.diameter / 2) for s in part.body.steps]
    return _plate_slices(part.body, part.away)


def _plate_slices(plate: Plate, away: int) -> list[tuple[float, float, Any]]:
    import shapely

    t = plate.thickness
    cuts = {0.0, t}
    for bore in plate.counterbores:
        cuts.add(bore.depth if bore.face == "chain" else t - bore.depth)
    for slot in plate.slots:
        cuts |= {t / 2 + sign * z for z in (slot.z_from, slot.z_to) for sign in (-1, 1)}
    edges = sorted(c for c in cuts if 0.0 <= c <= t)

    whole = shapely.Polygon(polygon(plate, TOLERANCE, containing=True))
    whole = shapely.difference(whole, shapely.union_all([_disk(h) for h in plate.holes]))
    slices = []
    for low, high in pairwise(edges):
        if high - low < 1e-9:
            continue
        middle = (low + high) / 2
        gone = [
            _disk(bore)
            for bore in plate.counterbores
            if (middle < bore.depth if bore.face == "chain" else middle > t - bore.depth)
        ]
        gone += [
            shapely.box(slot.x_from, -1e6, 1e6, 1e6)
            for slot in plate.slots
            if slot.z_from < abs(middle - t / 2) < slot.z_to
        ]
        area = shapely.difference(whole, shapely.union_all(gone)) if gone else whole
        first, last = sorted((away * low, away * high))
        slices += [(first, last, piece) for piece in shapely.get_parts(area) if not piece.is_empty]
    return slices


def _disk(feature: Hole | Counterbore) -> Any:
    import shapely

    return shapely.Polygon(polygon(circle(feature.center, feature.diameter, feature.name), TOLERANCE))


def _moved(build: Any, place: Placement) -> Geometry:
    x, y, _ = place.at
    if isinstance(build, float):
        return Round(x, y, build)
    import shapely

    c, s = np.cos(place.angle), np.sin(place.angle)
    turn = np.array([[c, s], [-s, c]])
    return Shape(shapely.transform(build, lambda at: at @ turn + (x, y)))


def machine_layers(parts: Iterable[Part], design: Design, sizes: Sizes) -> list[Layer]:
    """Layers of the parts, and where there is a sheave those of the straight chain (rope, …) and of the sheave with it."""
    far, sheave = design.far_end, design.sheave
    found = [layer for part in parts for layer in part_layers(part)]
    if sheave is None:
        return found
    half_width, half = far.plane_width / 2, far.height / 2
    straight = Strip(sizes.chain_end.length - half, half)
    around = Round(*sheave.center, sheave.pitch_radius + far.thickness_on_sheave / 2)
    found.append(Layer(far.noun, far.noun, "chain_end", -half_width, half_width, straight))
    found.append(Layer("sheave", "sheave", "machine", -half_width, half_width, around))
    return found
