"""What parts sweep over in a motion, as covers from step to step that are never smaller than the true sweep.

A part is a core with a radius round it: a link its axis with half its width. Between two steps the core lies in the convex
hull of its poses at both and halfway, the radius grown by how far the pose halfway stands off the straight way. Poses come
in as arrays. Seen along the axis, in the machine frame; mm and rad.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from parts.assembly import Frame, pose
from parts.design import Design, Floats
from parts.layers import Layer, Round, Shape, Strip
from parts.meeting import area_gaps

CLOSE = 0.05  # mm by which core and radius may be larger than the part
FINE = 0.5  # mm of excess that is left where a part comes near; coarser cells are cut up there
ROUNDS = 24  # cells that are cut up for one target at most,
CLEAR_ROUNDS = 6  # and where it is clear in any case
ARCS = 16  # lines to a quarter of a circle where one is drawn
SWUNG = np.radians(12.0)  # from one direction to the next in which a chain end that hangs loose is taken


@dataclass(frozen=True, slots=True)
class Motion:
    """Poses (2n + 1, 2k + 1): along the first axis the machine runs, along the second the link is free at one crank angle.

    Cells reach from each even row (column) to the next, odd ones are the middles; a motion without freedom has one
    column. Machine frame. ``swing`` is by how much the chain end may stand off the chain's direction, either way.
    """

    crank_angle: Floats  # (2n + 1)
    disc: Floats
    link: Floats
    chain: Floats
    chain_to: Floats
    swing: Floats
    finer: Callable[[int, int], Motion] | None = None  # the cell that begins at a row and a column, cut up


@dataclass(frozen=True, eq=False)
class Body:
    """One part in its mover's frame: every point of it is within ``radius`` of the convex core of these points.

    A strip's length differs from pose to pose; it has no core of its own.
    """

    part: str
    mover: str
    core: Floats  # (m, 2)
    radius: float
    strip: Strip | None = None


@dataclass(frozen=True, eq=False)
class Cover:
    """Convex cores (n) with a radius each that together hold one part in every pose of a motion.

    ``excess``: how much each may be larger than what the part sweeps over in its cell.
    """

    part: str
    cores: Any
    radius: Floats
    excess: Floats
    crank_angle: Floats  # middle of each
    cells: tuple[tuple[int, int], ...]  # row and column at which each begins
    body: Body
    motion: Motion


@dataclass(frozen=True, eq=False)
class Target:
    """What must not be met: an area, or everything beyond ``at`` along an axis (0 x, 1 y) to one side (±1)."""

    name: str
    area: Any = None
    axis: int = 0
    side: int = 1
    at: float = 0.0


@dataclass(frozen=True, slots=True)
class Approach:
    """How near a sweep comes to a target; below zero by how deep it runs into it. (x, y) is the part's point there."""

    target: str
    part: str
    clearance: float
    excess: float  # the true clearance may be that much larger
    crank_angle: float
    x: float
    y: float


# ---------------------------------------------------------------------------------------------------- bodies


def bodies(layers: Iterable[Layer]) -> tuple[Body, ...]:
    """One body a part and mover, without those that lie within another one of the same mover wherever it goes.

    What is on the disc counts as the circle that it goes round in, for the disc turns right round; it stands still.
    """
    import shapely

    shapes: dict[tuple[str, str], list[Any]] = {}
    found = []
    for layer in layers:
        if isinstance(layer.geometry, Strip):
            found.append(Body(layer.key, layer.mover, np.empty((0, 2)), 0.0, layer.geometry))
        else:
            shapes.setdefault((layer.key, layer.mover), []).append(layer.geometry)
    made = [_body(key, mover, some) for (key, mover), some in shapes.items()]
    areas = [_area(body) for body in made]
    for body, area in zip(made, areas, strict=True):
        larger = [o for o, other in zip(areas, made, strict=True) if other.mover == body.mover and o.area > area.area]
        if not any(shapely.covers(other, area) for other in larger):
            found.append(body)
    return tuple(found)


def _body(key: str, mover: str, shapes: Sequence[Round | Shape]) -> Body:
    import shapely

    spots = np.concatenate([[[g.x, g.y]] if isinstance(g, Round) else g.rings[0] for g in shapes])
    rounds = np.concatenate([[g.radius] if isinstance(g, Round) else np.zeros(len(g.rings[0])) for g in shapes])
    if mover == "disc":
        return Body(key, "machine", np.zeros((1, 2)), float((np.hypot(*spots.T) + rounds).max()))
    if len(spots) == 1:
        return Body(key, mover, spots, float(rounds[0]))
    whole = shapely.convex_hull(shapely.union_all([_filled(g) for g in shapes]))
    inner = shapely.maximum_inscribed_circle(whole, CLOSE / 2.0).length
    core = shapely.simplify(shapely.buffer(whole, -inner * 0.999), CLOSE / 4.0)
    corners = np.asarray(shapely.get_coordinates(whole))
    if not core.is_empty and core.geom_type == "Polygon":
        radius = float(shapely.distance(core, shapely.points(corners)).max())
        if shapely.covers(shapely.buffer(whole, CLOSE), shapely.buffer(core, radius, quad_segs=ARCS)):
            return Body(key, mover, np.asarray(shapely.get_coordinates(core.exterior))[:-1], radius)
    return Body(key, mover, corners[:-1], 0.0)


def _filled(geometry: Round | Shape) -> Any:
    return geometry.area if isinstance(geometry, Shape) else _disk((geometry.x, geometry.y), geometry.radius)


def _disk(center: tuple[float, float], radius: float) -> Any:
    import shapely

    return shapely.buffer(shapely.Point(*center), radius * OUT, quad_segs=ARCS)


OUT = 1.0 / np.cos(np.pi / (4.0 * ARCS))  # by which a drawn circle is larger, so that it holds the true one


def _area(body: Body) -> Any:
    import shapely

    return shapely.buffer(shapely.convex_hull(shapely.MultiPoint(body.core)), body.radius, quad_segs=ARCS)


# ---------------------------------------------------------------------------------------------------- covers


def covers(body: Body, motion: Motion, design: Design) -> Cover:
    """The cover of one body over a motion."""
    import shapely

    if body.mover == "machine":
        core = np.array([shapely.convex_hull(shapely.MultiPoint(body.core))])
        one = np.ones(1)
        return Cover(body.part, core, body.radius * one, CLOSE * one, motion.crank_angle[:1], ((0, 0),), body, motion)
    loose = body.mover == "chain_end" and body.strip is None and bool(np.any(motion.swing > 0.0))
    shape = np.broadcast_shapes(motion.link.shape, motion.chain.shape)
    cells = [(i, j) for i in _starts(shape[0]) for j in _starts(shape[1])]
    rows = np.array([i for i, _ in cells])[:, None] + np.arange(3 if shape[0] > 1 else 1)
    columns = np.array([j for _, j in cells])[:, None] + np.arange(3 if shape[1] > 1 else 1)
    halves = _halves(motion.swing) if loose else (np.zeros(1),)
    cores, radii, excess = [], [], []
    for directions in halves:
        at = _core(body, motion, design, directions)
        points = at[rows[:, :, None], columns[:, None, :]]  # (cells, 3 or 1, 3 or 1, points, 2)
        grown = _bulge(points, 1) + _bulge(points, 2)
        cores.append(shapely.convex_hull(shapely.linestrings(points.reshape(len(cells), -1, 2))))
        radii.append(body.radius + grown)
        further = (_tangents(motion.swing, directions) - 1.0) * np.hypot(*body.core.T).max() if loose else 0.0
        excess.append(2.0 * grown + _excess(points, body.strip is None and body.mover == "chain_end") + np.max(further))
    angles = np.tile(motion.crank_angle[rows[:, rows.shape[1] // 2]], len(halves))
    return Cover(
        body.part, np.concatenate(cores), np.concatenate(radii), np.concatenate(excess) + CLOSE, angles,
        tuple(cells) * len(halves), body, motion,
    )  # fmt: skip


def _starts(count: int) -> range:
    return range(0, max(1, count - 1), 2)


def _bulge(points: Floats, axis: int) -> Floats:
    """The most (cells) that a point halfway along an axis stands off the straight way between the ends: what a hull of all
    three may still lack is about a quarter of that, so growing by all of it is enough."""
    if points.shape[axis] < 3:
        return np.zeros(len(points))
    along = np.moveaxis(points, axis, 0)
    way, off = along[2] - along[0], along[1] - along[0]
    square = np.maximum(np.sum(way * way, axis=-1), 1e-18)
    share = np.clip(np.sum(way * off, axis=-1) / square, 0.0, 1.0)
    off = off - share[..., None] * way
    return np.asarray(np.sqrt(np.max(np.sum(off * off, axis=-1), axis=(1, 2))))


def _excess(points: Floats, drifts: bool) -> Floats:
    """By how much hulls (cells) may be larger than what is swept on straight ways, the middle pose left aside; on bent ones
    the chord comes on top, as far inside the bend as the bulge is outside.

    A point of the hull of a body before and after is (1 − t) a + t b, and within t (1 − t) |v_b − v_a| of the body on its
    way, v the ways that its points go: a quarter of how much these differ. Link and chain turn about an end of their own
    where they are free, and so fill a sector, which is its own hull; the chain's end (``drifts``) does not. Derived.
    """
    spread = _differ(points[:, -1] - points[:, 0])
    across = _differ(points[:, :, -1] - points[:, :, 0]) if drifts else 0.0
    return np.asarray((spread + across) / 4.0)


def _differ(ways: Floats) -> Floats:
    """By how much the ways of a body's points differ at most in each cell."""
    flat = ways.reshape(len(ways), -1, 2)
    box = flat.max(axis=1) - flat.min(axis=1)
    return np.asarray(np.hypot(box[:, 0], box[:, 1]))


def _core(body: Body, motion: Motion, design: Design, directions: Floats) -> Floats:
    """The points of the body's core in every pose: (rows, columns, points, 2)."""
    shape = np.broadcast_shapes(motion.link.shape, motion.chain.shape, motion.disc.shape)
    full = pose(design, motion.disc, motion.link, motion.chain).of(body.mover)
    frame = Frame(*(np.broadcast_to(v, shape) for v in full))
    if body.strip is not None:
        low, half = np.full(shape, body.strip.x_from), body.strip.half
        high = np.broadcast_to(np.maximum(motion.chain_to, body.strip.x_from), shape)
        ends = np.stack([low, high, high, low], axis=-1)
        return _placed(ends, np.broadcast_to(np.array([-half, -half, half, half]), ends.shape), frame)
    if len(directions) == 1:
        return _placed(body.core[:, 0], body.core[:, 1], frame)
    out = np.broadcast_to(_tangents(motion.swing, directions), shape)[..., None]
    x, y = out * body.core[:, 0], out * body.core[:, 1]
    turned = [_placed(x, y, frame._replace(rotation=frame.rotation + g * motion.swing)) for g in directions]
    return np.concatenate([_placed(body.core[:, 0], body.core[:, 1], frame), *turned], axis=-2)


def _halves(swing: Floats) -> tuple[Floats, Floats]:
    """Shares of the swing to one side and to the other: each half is a sector, which is its own hull."""
    count = 1 + max(1, int(np.ceil(float(swing.max()) / SWUNG)))
    return np.linspace(-1.0, 0.0, count), np.linspace(0.0, 1.0, count)


def _tangents(swing: Floats, directions: Floats) -> Floats:
    """How much further out than the arc the tangents meet, between two of the directions in which a chain end hangs."""
    return np.asarray(1.0 / np.cos(swing * (directions[1] - directions[0]) / 2.0))


def _placed(x: Floats, y: Floats, frame: Frame) -> Floats:
    c, s = np.cos(frame.rotation)[..., None], np.sin(frame.rotation)[..., None]
    return np.stack([frame.x[..., None] + c * x - s * y, frame.y[..., None] + s * x + c * y], axis=-1)


# ---------------------------------------------------------------------------------------------------- distances


def approach(found: Sequence[Cover], target: Target, design: Design) -> Approach:
    """The part that comes nearest to a target, and where.

    A cover that may meet the target only because it is too large is cut up there until that is no longer so: the nearest
    cell bounds the distance from below, so the nearest is looked at first (branch and bound).
    """
    some = list(found)
    apart = [_apart(cover, target) for cover in some]
    for done in range(ROUNDS):
        k, i = _least(apart)
        cover = some[k]
        doubt, near = float(cover.excess[i]), float(apart[k][i])
        if doubt <= FINE or abs(near) > doubt or cover.motion.finer is None or (near >= 0.0 and done >= CLEAR_ROUNDS):
            break
        part = covers(cover.body, cover.motion.finer(*cover.cells[i]), design)
        apart[k][i] = np.inf
        some.append(part)
        apart.append(_apart(part, target))
    k, i = _least(apart)
    cover = some[k]
    x, y = _point(cover.cores[i], float(cover.radius[i]), target)
    where = (float(cover.excess[i]), float(cover.crank_angle[i]))
    return Approach(target.name, cover.part, float(apart[k][i]), *where, x, y)


def _least(apart: Sequence[Floats]) -> tuple[int, int]:
    k = int(np.argmin([values.min() for values in apart]))
    return k, int(np.argmin(apart[k]))


def _apart(cover: Cover, target: Target) -> Floats:
    """Signed distances (cells)."""
    import shapely

    if target.area is None:
        bounds = np.asarray(shapely.bounds(cover.cores))
        apart = target.side * (target.at - bounds[:, target.axis + (2 if target.side > 0 else 0)])
    else:
        apart = area_gaps(Shape(target.area), cover.cores)
    return np.asarray(apart - cover.radius)


def _point(core: Any, radius: float, target: Target) -> tuple[float, float]:
    """The point of a core with its radius that is nearest to a target; of a core that is in it, its deepest."""
    import shapely

    if target.area is None:
        corners = np.asarray(shapely.get_coordinates(core))
        on = corners[int(np.argmax(target.side * corners[:, target.axis]))] + 0.0
        on[target.axis] += target.side * radius
    elif not shapely.intersects(core, target.area):
        on, to = np.asarray(shapely.get_coordinates(shapely.shortest_line(core, target.area)))
        on = on + radius * (to - on) / max(float(np.hypot(*(to - on))), 1e-12)
    else:
        corners = np.asarray(shapely.get_coordinates(shapely.intersection(core, target.area)))
        at = shapely.points(corners)
        edges = (shapely.distance(shapely.boundary(a), at) for a in (target.area, core))
        depth = np.maximum(*(np.nan_to_num(edge, nan=0.0) for edge in edges))  # a point has no edge
        on = corners[int(np.argmax(depth))]
    return float(on[0]), float(on[1])


def outline_of(found: Iterable[Cover], smooth: float) -> Any:
    """All that covers hold together, its outline with fewer corners: up to twice ``smooth`` larger, never smaller."""
    import shapely

    parts = []
    for cover in found:
        # a little more round the cores of nearly one radius saves drawing each by itself
        radius = np.ceil(cover.radius / smooth) * smooth
        for r in np.unique(radius):
            whole = shapely.union_all(cover.cores[radius == r])
            parts.append(shapely.buffer(whole, r * OUT, quad_segs=ARCS) if r > 0.0 else whole)
    whole = shapely.buffer(shapely.union_all(parts), 0.6 * smooth, quad_segs=4)
    return shapely.simplify(whole, 0.4 * smooth)
