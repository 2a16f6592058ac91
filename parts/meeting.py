"""How far two layers are apart in many poses at once, and how deep they run into each other. Lengths in mm."""

from __future__ import annotations

from typing import Any

import numpy as np

from parts.assembly import Frame
from parts.design import Floats
from parts.layers import Geometry, Round, Shape, Strip


def relative(inner: Frame, outer: Frame) -> Frame:
    """The frame ``inner`` as seen from ``outer``."""
    c, s = np.cos(outer.rotation), np.sin(outer.rotation)
    dx, dy = inner.x - outer.x, inner.y - outer.y
    return Frame(dx * c + dy * s, -dx * s + dy * c, inner.rotation - outer.rotation)


def inverse(frame: Frame) -> Frame:
    c, s = np.cos(frame.rotation), np.sin(frame.rotation)
    return Frame(-frame.x * c - frame.y * s, frame.x * s - frame.y * c, -frame.rotation)


def moved(points: Floats, frame: Frame) -> Floats:
    """Points (k, 2), or (n, k, 2), of a frame in each of its n poses: (n, k, 2)."""
    c, s = np.cos(frame.rotation)[:, None], np.sin(frame.rotation)[:, None]
    x, y = points[..., 0], points[..., 1]
    return np.stack([frame.x[:, None] + c * x - s * y, frame.y[:, None] + s * x + c * y], axis=-1)


def at_poses(frame: Frame, which: Any) -> Frame:
    return Frame(frame.x[which], frame.y[which], frame.rotation[which])


def gaps(a: Geometry, b: Geometry, b_in_a: Frame, chain_to: Floats) -> Floats:
    """Signed distance of two layers in each pose: below zero by how deep they run into each other.

    Where they are far apart, in poses that cannot be the nearest, it is a lower bound that is above the least.
    ``chain_to`` (n) is where the straight chain ends.
    """
    if isinstance(a, Round) and not isinstance(b, Round):
        return gaps(b, a, inverse(b_in_a), chain_to)
    if isinstance(b, Round):
        center = moved(np.array([[b.x, b.y]]), b_in_a)[:, 0]
        return _to_point(a, center, chain_to) - b.radius
    if isinstance(a, Strip):
        return gaps(b, a, inverse(b_in_a), chain_to)
    assert isinstance(a, Shape)
    if isinstance(b, Strip):
        return _shape_gaps(a, moved(_corners(b, chain_to), b_in_a), ())
    far = _far_apart(a, b, b_in_a)
    outer, inner = b.rings

    def exact(which: Any) -> Floats:
        frame = at_poses(b_in_a, which)
        return _shape_gaps(a, moved(outer, frame), tuple(moved(ring, frame) for ring in inner))

    # the pose that looks nearest bounds the least distance; whatever is surely farther needs no closer look
    first = np.array([int(np.argmin(far))])
    near = np.flatnonzero(far <= max(float(exact(first)[0]), 0.0) + 1e-9)
    result = far.copy()
    result[near] = exact(near)
    return result


def _far_apart(a: Shape, b: Shape, b_in_a: Frame) -> Floats:
    """Lower bound of the distance in each pose."""
    ax, ay, ra = a.bounds
    bx, by, rb = b.bounds
    middle = moved(np.array([[bx, by]]), b_in_a)[:, 0]
    return np.asarray(np.maximum(np.hypot(middle[:, 0] - ax, middle[:, 1] - ay) - ra - rb, 0.0))


def _to_point(a: Geometry, at: Floats, chain_to: Floats) -> Floats:
    """Signed distance of points (n, 2) to a layer, negative inside it."""
    if isinstance(a, Round):
        return np.asarray(np.hypot(at[:, 0] - a.x, at[:, 1] - a.y) - a.radius)
    if isinstance(a, Strip):
        half = np.maximum(chain_to - a.x_from, 0.0) / 2
        u, v = np.abs(at[:, 0] - a.x_from - half) - half, np.abs(at[:, 1]) - a.half
        outside = np.hypot(np.maximum(u, 0.0), np.maximum(v, 0.0))
        return np.asarray(outside + np.minimum(np.maximum(u, v), 0.0))
    import shapely

    away = shapely.distance(a.area.boundary, shapely.points(at))
    inside = shapely.contains_xy(a.area, at[:, 0], at[:, 1])
    return np.asarray(np.where(inside, -away, away))


def _corners(strip: Strip, chain_to: Floats) -> Floats:
    low, high = np.full_like(chain_to, strip.x_from), np.maximum(chain_to, strip.x_from + 1e-6)
    half = np.full_like(chain_to, strip.half)
    return np.stack([np.stack(p, axis=-1) for p in ((low, -half), (high, -half), (high, half), (low, half))], axis=1)


def _areas(outer: Floats, inner: tuple[Floats, ...]) -> Any:
    import shapely

    if not inner:
        return shapely.polygons(outer)
    holes = np.stack([shapely.linearrings(ring) for ring in inner], axis=-1)
    return shapely.polygons(shapely.linearrings(outer), holes=holes)


def _shape_gaps(a: Shape, outer: Floats, inner: tuple[Floats, ...]) -> Floats:
    return area_gaps(a, _areas(outer, inner))


def area_gaps(a: Shape, areas: Any) -> Floats:
    """Signed distance of a shape to each of many areas in its frame: below zero by how deep they run into each other."""
    import shapely

    shapely.prepare(a.area)
    result = np.asarray(shapely.distance(a.area, areas))
    meet = np.flatnonzero(result <= 0.0)
    if meet.size:
        result[meet] = -_depth(a, areas[meet])
    return result


def _depth(a: Shape, areas: Any) -> Floats:
    """How deep areas run into a shape: the corner that is deepest, or the mean width of what they share."""
    import shapely

    shared = shapely.intersection(a.area, areas)
    around = np.maximum(shapely.length(shared), 1e-12)
    depth = 2 * shapely.area(shared) / around
    edge = a.area.boundary
    corners, owner = shapely.get_coordinates(shared, return_index=True)
    if len(corners):
        edges = shapely.boundary(areas)
        from_a = shapely.distance(edge, shapely.points(corners))
        # a point has no edge: how deep it is goes by the shape alone
        from_b = np.nan_to_num(shapely.distance(edges[owner], shapely.points(corners)), nan=0.0)
        np.maximum.at(depth, owner, np.maximum(from_a, from_b))
    return np.asarray(depth)


def meeting_point(a: Geometry, b: Geometry, b_in_a: Frame, chain_to: float) -> tuple[float, float]:
    """Where two layers meet, or the middle of the gap between them, in one pose; in the frame of ``a``."""
    import shapely

    still = Frame(np.zeros(1), np.zeros(1), np.zeros(1))
    end = np.array([chain_to])
    one, other = _one_area(a, still, end), _one_area(b, b_in_a, end)
    shared = shapely.intersection(one, other)
    at = shapely.centroid(shared) if not shared.is_empty else shapely.centroid(shapely.shortest_line(one, other))
    return float(at.x), float(at.y)


def _one_area(shape: Geometry, frame: Frame, chain_to: Floats) -> Any:
    import shapely

    if isinstance(shape, Round):
        center = moved(np.array([[shape.x, shape.y]]), frame)[0, 0]
        return shapely.buffer(shapely.Point(*center), shape.radius, quad_segs=32)
    if isinstance(shape, Strip):
        return _areas(moved(_corners(shape, chain_to), frame), ())[0]
    outer, inner = shape.rings
    return _areas(moved(outer, frame), tuple(moved(ring, frame) for ring in inner))[0]
