"""Cut files (DXF R2000) of plate parts, true size, seen on the face towards the chain; audited after writing.

Layers: CUT outlines and holes to size, PILOT holes under size, DRILL centre marks, MARK etching, NOTE the rest.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from contextlib import contextmanager
from itertools import pairwise
from math import atan, degrees, dist, hypot, isclose, pi, sin, tan
from pathlib import Path
from typing import Any

import ezdxf
from ezdxf.document import Drawing
from ezdxf.enums import TextEntityAlignment
from ezdxf.filemanagement import new, readfile

from exporters.dxf_notes import Notes, Units, block_lines, lay_out
from parts.cutting import hole_work
from parts.lettering import mark_strokes
from parts.outline import Arc, Line, Part, Plate, Point, Segment
from parts.segments import point_at, radius, start_angle, sweep
from parts.shape import cut_area, mirrored, polygon

_COLORS = {"CUT": 7, "PILOT": 1, "DRILL": 6, "MARK": 3, "NOTE": 8}  # black or white, red, magenta, green, grey
_WARNING_COLOR = 1
SCALE: dict[Units, float] = {"metric": 1.0, "us": 1 / 25.4}
_INSUNITS: dict[Units, int] = {"metric": 4, "us": 1}
_ALLOWED = {
    "CUT": {"LWPOLYLINE", "CIRCLE"},
    "PILOT": {"CIRCLE"},
    "DRILL": {"LINE"},
    "MARK": {"LINE", "ARC", "CIRCLE"},
    "NOTE": {"LINE", "CIRCLE", "TEXT"},
}
_AREA_LIMIT = 1e-6  # relative
_PLACE_LIMIT = 1e-6  # mm


class CutFileError(ValueError):
    """A cut file that does not say what its part is."""


def write_plate(
    part: Part,
    path: Path,
    *,
    units: Units,
    number: str,
    revision: str,
    notes: Sequence[str] = (),
    falls_short: Sequence[str] = (),
) -> None:
    """Write the cut file of one plate part.

    ``units`` "us" writes inches. ``notes`` are added to the part's own; each line of ``falls_short`` is written
    with the words FALLS SHORT. A part whose body lies above z = 0 is drawn mirrored, its text is not.
    """
    plate = _plate(part)
    document = new_document(units)
    draw = _Pen(document, SCALE[units])
    flip = _flip(part)
    outline = mirrored(plate.outline) if flip < 0 else plate.outline
    corners = polygon(outline, 0.05)
    draw.outline(outline)
    for hole in plate.holes:
        center = (hole.center[0], flip * hole.center[1])
        work = hole_work(hole, plate.thickness)
        if work.way == "drill":
            arm = min(max(hole.diameter / 4, 0.75), 2.5)
            draw.line("DRILL", (center[0] - arm, center[1]), (center[0] + arm, center[1]))
            draw.line("DRILL", (center[0], center[1] - arm), (center[0], center[1] + arm))
        else:
            draw.circle("PILOT" if work.way == "pilot" else "CUT", center, work.first_diameter)
    for mark in plate.marks:
        for stroke in mark_strokes(mark, flip < 0):
            draw.stroke("MARK", stroke)
    lines = block_lines(
        part, plate, units=units, number=number, revision=revision, notes=notes, falls_short=falls_short
    )
    draw.notes(lay_out(part, plate, corners, lines, units))
    draw.finish()
    with fixed_metadata():
        document.saveas(path)


@contextmanager
def fixed_metadata() -> Iterator[None]:
    """No time stamps and no random identifiers while this lasts."""
    options: Any = ezdxf.options  # type: ignore[attr-defined]
    before = options.write_fixed_meta_data_for_testing
    options.write_fixed_meta_data_for_testing = True
    try:
        yield
    finally:
        options.write_fixed_meta_data_for_testing = before


def _plate(part: Part) -> Plate:
    if not isinstance(part.body, Plate):
        raise TypeError(f"{part.name} is turned, not a plate: it has no cut file")
    return part.body


def _flip(part: Part) -> float:
    """The sign of y in the view on the face towards the chain."""
    return -1.0 if part.away > 0 else 1.0


def new_document(units: Units, colors: Mapping[str, int] = _COLORS) -> Drawing:
    """An empty drawing in the design's unit, with a layer of each name."""
    with fixed_metadata():
        document = new("R2000", setup=False)
    document.header["$INSUNITS"] = _INSUNITS[units]
    document.header["$MEASUREMENT"] = 1 if units == "metric" else 0
    document.header["$LUNITS"] = 2
    document.header["$LUPREC"] = 3 if units == "metric" else 4
    dash = 3.0 * SCALE[units]
    document.linetypes.add("DASHED", [1.5 * dash, dash, -0.5 * dash], description="Dashed __ __ __")
    for name, color in colors.items():
        document.layers.add(name, color=color)
    return document


class _Pen:
    """Draws into a document, mm to the file's unit."""

    def __init__(self, document: Drawing, scale: float) -> None:
        self.document = document
        self.space = document.modelspace()
        self.scale = scale
        self.seen: list[Point] = []

    def at(self, point: Point) -> Point:
        scaled = (point[0] * self.scale + 0.0, point[1] * self.scale + 0.0)
        self.seen.append(scaled)
        return scaled

    def line(self, layer: str, start: Point, end: Point, **attributes: Any) -> None:
        self.space.add_line(self.at(start), self.at(end), dxfattribs={"layer": layer, **attributes})

    def circle(self, layer: str, center: Point, diameter: float, **attributes: Any) -> None:
        r = diameter / 2
        self.at((center[0] - r, center[1] - r))
        self.at((center[0] + r, center[1] + r))
        self.space.add_circle(self.at(center), r * self.scale, dxfattribs={"layer": layer, **attributes})

    def stroke(self, layer: str, segment: Segment) -> None:
        if isinstance(segment, Line):
            self.line(layer, segment.start, segment.end)
            return
        turn = sweep(segment)
        if isclose(abs(turn), 2 * pi):
            self.circle(layer, segment.center, 2 * radius(segment))
            return
        first = start_angle(segment)
        low, high = (first, first + turn) if turn > 0 else (first + turn, first)
        r = radius(segment) * self.scale
        self.space.add_arc(
            self.at(segment.center), r, degrees(low) % 360, degrees(high) % 360, dxfattribs={"layer": layer}
        )

    def outline(self, outline: tuple[Segment, ...]) -> None:
        """The outer outline: a circle where it is one, or else one closed polyline with arcs as bulges."""
        whole = _whole_circle(outline)
        if whole is not None:
            self.circle("CUT", whole.center, 2 * radius(whole))
            return
        points: list[tuple[float, float, float]] = []
        for segment in outline:
            turn = sweep(segment) if isinstance(segment, Arc) else 0.0
            pieces = 2 if abs(turn) > pi * (1 + 1e-9) else 1  # no bulge above a half circle
            bulge = tan(turn / pieces / 4)
            points += [(*self.at(point_at(segment, i / pieces)), bulge) for i in range(pieces)]
            self.at(point_at(segment, 0.5))
        self.space.add_lwpolyline(points, format="xyb", close=True, dxfattribs={"layer": "CUT"})

    def notes(self, notes: Notes) -> None:
        for text in notes.texts:
            attributes: dict[str, Any] = {"layer": "NOTE"}
            if text.warning:
                attributes["color"] = _WARNING_COLOR
            entity = self.space.add_text(text.text, height=text.height * self.scale, dxfattribs=attributes)
            alignment = TextEntityAlignment.RIGHT if text.align == "right" else TextEntityAlignment.LEFT
            entity.set_placement(self.at(text.at), align=alignment)
            self.at(text.box[:2])
            self.at(text.box[2:])
        for leader in notes.leaders:
            for start, end in pairwise(leader):
                self.line("NOTE", start, end)
        for center, diameter in notes.hidden_circles:
            self.circle("NOTE", center, diameter, linetype="DASHED")
        for start, end in notes.hidden_lines:
            self.line("NOTE", start, end, linetype="DASHED")

    def finish(self) -> None:
        """Set the extents, so that a viewer opens on the whole sheet."""
        xs, ys = zip(*self.seen, strict=True)
        low, high = (min(xs), min(ys), 0.0), (max(xs), max(ys), 0.0)
        self.document.header["$EXTMIN"], self.document.header["$EXTMAX"] = low, high
        self.space.reset_extents(low, high)
        middle = ((low[0] + high[0]) / 2, (low[1] + high[1]) / 2)
        self.document.set_modelspace_vport(1.05 * max(high[1] - low[1], (high[0] - low[0]) / 1.6), middle)


def _whole_circle(outline: tuple[Segment, ...]) -> Arc | None:
    """The first arc of an outline that is one full circle, or None."""
    arcs = [s for s in outline if isinstance(s, Arc)]
    if len(arcs) != len(outline) or not isclose(sum(sweep(a) for a in arcs), 2 * pi, rel_tol=1e-9):
        return None
    same = all(dist(a.center, arcs[0].center) < 1e-9 and abs(radius(a) - radius(arcs[0])) < 1e-9 for a in arcs)
    return arcs[0] if same else None


def audit(path: Path, part: Part) -> None:
    """Read a cut file back and hold it against its part; raise ``CutFileError`` with what is wrong.

    Checked: the library's own audit; layers and what they hold; one closed outline; no duplicates, nothing without
    length; every hole in its place, cut ones at size, pilot ones under size; the area of outline less holes, those
    of PILOT and DRILL counted at their finished size.
    """
    plate = _plate(part)
    document = readfile(path)
    found = document.audit()
    faults = [f"the file's structure: {e.message}" for e in (*found.errors, *found.fixes)]
    unit = document.header.get("$INSUNITS")
    scale = next((s for u, s in SCALE.items() if _INSUNITS[u] == unit), None)
    if scale is None:
        raise CutFileError(f"{path.name}: the file's unit is neither millimetre nor inch")
    entities = list(document.modelspace())
    for entity in entities:
        layer, kind = entity.dxf.layer, entity.dxftype()
        if kind not in _ALLOWED.get(layer, set()):
            faults.append(f"a {kind} on layer {layer}")
    faults += _repeats(entities)
    faults += _holes(entities, part, scale)
    area, problems = _outline_area(entities, plate, scale)
    faults += problems
    if not problems:
        finished = area - sum(pi * h.diameter**2 / 4 for h in plate.holes)
        wanted = cut_area(plate)
        if not isclose(finished, wanted, rel_tol=_AREA_LIMIT):
            faults.append(f"the cut area is {finished:.6g} mm² instead of {wanted:.6g} mm²")
    if faults:
        raise CutFileError(f"{path.name}: " + "; ".join(faults))


def _shape_key(entity: Any) -> tuple[Any, ...] | None:
    """What makes two entities the same stroke, rounded; None for those that may repeat."""
    dxf = entity.dxf
    match entity.dxftype():
        case "CIRCLE":
            return ("circle", round(dxf.center.x, 6), round(dxf.center.y, 6), round(dxf.radius, 6))
        case "ARC":
            values = (dxf.center.x, dxf.center.y, dxf.radius, dxf.start_angle, dxf.end_angle)
            return ("arc", *(round(v, 6) for v in values))
        case "LINE":
            ends = sorted((round(p.x, 6), round(p.y, 6)) for p in (dxf.start, dxf.end))
            return ("line", *ends)
        case "LWPOLYLINE":
            return ("polyline", *sorted((round(x, 6), round(y, 6)) for x, y in entity.get_points("xy")))
    return None


def _repeats(entities: Sequence[Any]) -> list[str]:
    faults: list[str] = []
    seen: set[tuple[Any, ...]] = set()
    for entity in entities:
        layer = entity.dxf.layer
        if layer == "NOTE":
            continue
        key = _shape_key(entity)
        if key is not None and (layer, key) in seen:
            faults.append(f"a {entity.dxftype()} twice on layer {layer}")
        seen.add((layer, key))
        if entity.dxftype() == "LINE" and dist(entity.dxf.start, entity.dxf.end) < 1e-9:
            faults.append(f"a line without length on layer {layer}")
        if entity.dxftype() in ("CIRCLE", "ARC") and entity.dxf.radius < 1e-9:
            faults.append(f"a circle without size on layer {layer}")
    return faults


def _holes(entities: Sequence[Any], part: Part, scale: float) -> list[str]:
    """Every hole where it should be on the layer where it should be, and no more of them."""
    plate, flip = _plate(part), _flip(part)
    faults: list[str] = []
    used = 0
    for hole in plate.holes:
        work = hole_work(hole, plate.thickness)
        x, y = hole.center[0], flip * hole.center[1]
        layer = work.way.upper()
        here = [e for e in entities if e.dxf.layer == layer and _stands_at(e, x * scale, y * scale, scale)]
        if work.way != "drill":
            here = [e for e in here if abs(2 * e.dxf.radius / scale - work.first_diameter) < _PLACE_LIMIT]
        if len(here) != (2 if work.way == "drill" else 1):
            faults.append(f"{hole.name} is not on layer {layer} at its place and size")
        if work.way == "pilot" and not work.first_diameter < hole.diameter:
            faults.append(f"{hole.name} is not under size")
        used += len(here)
    drawn = [e for e in entities if e.dxf.layer in ("CUT", "PILOT", "DRILL")]
    if len(drawn) != used + 1:
        faults.append(f"{len(drawn)} entities to cut or drill where {used + 1} belong")
    return faults


def _stands_at(entity: Any, x: float, y: float, scale: float) -> bool:
    if entity.dxftype() == "CIRCLE":
        at = entity.dxf.center
    elif entity.dxftype() == "LINE":
        at = entity.dxf.start.lerp(entity.dxf.end)
    else:
        return False
    return hypot(at.x - x, at.y - y) < _PLACE_LIMIT * scale


def _outline_area(entities: Sequence[Any], plate: Plate, scale: float) -> tuple[float, list[str]]:
    """Area in mm² inside the outer outline as the file has it, and what is wrong with that outline."""
    lines = [e for e in entities if e.dxf.layer == "CUT" and e.dxftype() == "LWPOLYLINE"]
    circles = [e for e in entities if e.dxf.layer == "CUT" and e.dxftype() == "CIRCLE"]
    if not lines and circles and _whole_circle(plate.outline) is not None:
        return pi * max(c.dxf.radius for c in circles) ** 2 / scale**2, []
    if len(lines) != 1:
        return 0.0, [f"{len(lines)} outlines where one belongs"]
    if not lines[0].closed:
        return 0.0, ["the outline is not closed"]
    points = list(lines[0].get_points("xyb"))
    twice = 0.0
    for (x0, y0, bulge), (x1, y1, _) in zip(points, points[1:] + points[:1], strict=True):
        chord = hypot(x1 - x0, y1 - y0)
        if chord < 1e-9:
            return 0.0, ["a piece of the outline has no length"]
        twice += x0 * y1 - x1 * y0
        if bulge:  # the segment between chord and arc
            turn = 4 * atan(bulge)
            r = chord / 2 / sin(turn / 2)
            twice += r * r * (turn - sin(turn))
    return twice / 2 / scale**2, []
