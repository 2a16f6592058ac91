"""Solids from the same records as the cut files, and the name of every face of a solid.

The solid modeller is imported inside the functions only. Lengths in mm, in the part frame.
"""

from __future__ import annotations

from itertools import pairwise
from math import atan2, dist, hypot
from typing import TYPE_CHECKING, Any

from parts.outline import Arc, Counterbore, Hole, Line, Part, Plate, Point, Segment, Turned
from parts.segments import covers, distance, point_at, radius
from parts.shape import profile

if TYPE_CHECKING:
    from cadquery import Face, Shape

_NEAR = 1e-4  # mm: how exactly a face has to lie where its feature says


def solid(part: Part) -> Shape:
    """The solid of one part in its part frame."""
    return _plate(part.body, part.away) if isinstance(part.body, Plate) else _turned(part.body)


def _edges(outline: tuple[Segment, ...], z: float) -> list[Any]:
    import cadquery as cq

    def at(point: Point) -> Any:
        return cq.Vector(point[0], point[1], z)

    if len(outline) == 1 and isinstance(outline[0], Arc):
        return [cq.Edge.makeCircle(radius(outline[0]), at(outline[0].center), cq.Vector(0, 0, 1))]
    return [
        cq.Edge.makeLine(at(s.start), at(s.end))
        if isinstance(s, Line)
        else cq.Edge.makeThreePointArc(at(s.start), at(point_at(s, 0.5)), at(s.end))
        for s in outline
    ]


def _plate(plate: Plate, away: int) -> Shape:
    import cadquery as cq

    t = plate.thickness
    low = min(0.0, away * t)
    up = cq.Vector(0, 0, 1)

    def cylinder(center: Point, diameter: float, z: float, height: float) -> Any:
        return cq.Solid.makeCylinder(diameter / 2, height, cq.Vector(*center, z), up)

    outer = cq.Wire.assembleEdges(_edges(plate.outline, low))
    inner = [
        cq.Wire.assembleEdges([cq.Edge.makeCircle(h.diameter / 2, cq.Vector(*h.center, low), up)]) for h in plate.holes
    ]
    body: Any = cq.Solid.extrudeLinear(outer, inner, cq.Vector(0, 0, t))
    tools = []
    for bore in plate.counterbores:
        first, last = (0.0, away * bore.depth) if bore.face == "chain" else (away * (t - bore.depth), away * t)
        tools.append(cylinder(bore.center, bore.diameter, min(first, last), bore.depth))
    if plate.slots:
        box = body.BoundingBox()
        middle = low + t / 2
        for slot in plate.slots:
            long, wide = box.xmax - slot.x_from + 1, box.ylen + 2
            low_high = [(slot.z_from, slot.z_to), (-slot.z_to, -slot.z_from)]
            for start, end in low_high if slot.z_from > 0 else [(-slot.z_to, slot.z_to)]:
                corner = cq.Vector(slot.x_from, box.ymin - 1, middle + start)
                tools.append(cq.Solid.makeBox(long, wide, end - start, corner))
    if tools:
        body = body.cut(*tools)
    solids = body.Solids()
    return solids[0] if len(solids) == 1 else body


def _turned(turned: Turned) -> Shape:
    import cadquery as cq

    bore = turned.bore / 2
    points = [(r, z) for z, r in profile(turned)]
    points = [(bore, points[0][1]), *points, (bore, points[-1][1])]
    corners = [p for i, p in enumerate(points) if i == 0 or dist(p, points[i - 1]) > _NEAR / 10]
    vectors = [cq.Vector(r, 0, z) for r, z in corners]
    wire = cq.Wire.makePolygon(vectors, close=True)
    shape: Shape = cq.Solid.revolve(wire, [], 360.0, cq.Vector(0, 0, 0), cq.Vector(0, 0, 1))
    return shape


def named_faces(part: Part, shape: Shape) -> dict[str, Face]:
    """Every face of a part's solid by the name of the feature that it belongs to.

    Faces are told by where they lie, so this comes after the last modelling operation. Where one feature has several
    faces (the flank that slots divide), the further ones are ``name_2``, ``name_3``, … going up in z, then x, then y.
    A face that belongs to no feature raises ``ValueError``.
    """
    found: dict[str, list[tuple[tuple[float, float, float], Face]]] = {}
    for face in shape.Faces():
        center = face.Center().toTuple()
        if isinstance(part.body, Plate):
            name = _plate_face(part.body, part.away, face)
        else:
            name = _turned_face(part.body, face)
        if name is None:
            kind = face.geomType().lower()
            at = ", ".join(f"{c:.3f}" for c in center)
            raise ValueError(f"{part.name}: the {kind} face at ({at}) mm belongs to no named feature")
        found.setdefault(name, []).append((center, face))

    def order(item: tuple[tuple[float, float, float], Face]) -> tuple[float, float, float]:
        x, y, z = item[0]
        return (round(z, 5), round(x, 5), round(y, 5))

    named: dict[str, Face] = {}
    for name, faces in found.items():
        for i, (_, face) in enumerate(sorted(faces, key=order)):
            named[name if i == 0 else f"{name}_{i + 1}"] = face
    return named


def _axis(face: Face) -> tuple[Point, float]:
    """Where the axis of a cylinder along z runs, and its radius."""
    cylinder = face._geomAdaptor().Cylinder()
    at = cylinder.Axis().Location()
    return (at.X(), at.Y()), cylinder.Radius()


def _within(face: Face) -> tuple[float, float, float]:
    """A point in the middle of a face's patch of surface."""
    u0, u1, v0, v1 = face._uvBounds()
    at = face._geomAdaptor().Value((u0 + u1) / 2, (v0 + v1) / 2)
    return (at.X(), at.Y(), at.Z())


def _plate_face(plate: Plate, away: int, face: Face) -> str | None:
    t = plate.thickness
    if face.geomType() == "CYLINDER":
        center, r = _axis(face)
        x, y, _ = _within(face)
        rounds: list[Hole | Counterbore] = [*plate.holes, *plate.counterbores]
        for feature in rounds:
            if dist(center, feature.center) < _NEAR and abs(2 * r - feature.diameter) < _NEAR:
                return feature.name
        for segment in plate.outline:
            if not isinstance(segment, Arc) or dist(center, segment.center) > _NEAR:
                continue
            if abs(r - radius(segment)) < _NEAR and covers(segment, atan2(y - center[1], x - center[0])):
                return segment.name
        return None
    normal = face.normalAt()
    x, y, z = face.Center().toTuple()
    middle = away * t / 2
    if abs(normal.z) > 0.5:
        depth = away * z  # from the face towards the chain
        if abs(depth) < _NEAR:
            return "chain_face"
        if abs(depth - t) < _NEAR:
            return "back_face"
        corners = [v.toTuple() for v in face.Vertices()]
        for bore in plate.counterbores:
            level = bore.depth if bore.face == "chain" else t - bore.depth
            reach = max(hypot(vx - bore.center[0], vy - bore.center[1]) for vx, vy, _ in corners)
            if abs(depth - level) < _NEAR and reach < bore.diameter / 2 + _NEAR:
                return f"{bore.name}_floor"
        for slot in plate.slots:
            if min(abs(abs(z - middle) - level) for level in (slot.z_from, slot.z_to)) < _NEAR:
                return f"{slot.name}_wall"
        return None
    for slot in plate.slots:
        inside = slot.z_from - _NEAR < abs(z - middle) < slot.z_to + _NEAR
        if abs(normal.x) > 0.5 and abs(x - slot.x_from) < _NEAR and inside:
            return f"{slot.name}_floor"
    for segment in plate.outline:
        ends = [(v.X, v.Y) for v in face.Vertices()]
        if isinstance(segment, Line) and all(distance(segment, e) < _NEAR for e in ends):
            return segment.name
    return None


def _turned_face(turned: Turned, face: Face) -> str | None:
    steps = turned.steps
    _, _, z = _within(face)
    kind = face.geomType()
    if kind == "PLANE":
        if abs(z - steps[0].z_from) < _NEAR:
            return "end_from"
        if abs(z - steps[-1].z_to) < _NEAR:
            return "end_to"
        for low, high in pairwise(steps):
            if abs(z - low.z_to) < _NEAR:
                return f"{low.name}_shoulder_to" if face.normalAt().z > 0 else f"{high.name}_shoulder_from"
        return None
    if kind == "CYLINDER":
        _, r = _axis(face)
        if turned.bore and abs(2 * r - turned.bore) < _NEAR:
            return "bore"
        return next((s.name for s in steps if s.z_from < z < s.z_to and abs(2 * r - s.diameter) < _NEAR), None)
    for step in steps:
        if step.z_from < z < step.z_from + step.chamfer_from:
            return f"{step.name}_chamfer_from"
        if step.z_to - step.chamfer_to < z < step.z_to:
            return f"{step.name}_chamfer_to"
    return None
