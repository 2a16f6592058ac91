"""Cut files: what the layers hold, sizes and text, read back by the library; audited; the same bytes every time."""

from __future__ import annotations

import re
from dataclasses import replace
from itertools import combinations
from math import hypot, pi
from pathlib import Path
from typing import Any, Literal

import pytest
import shapely
from ezdxf.filemanagement import readfile

from exporters.dxf import CutFileError, audit, write_plate
from exporters.dxf_notes import Notes, block_lines, hole_text, lay_out, size
from parts.cutting import hole_work
from parts.lettering import text_strokes, text_width, written
from parts.outline import Arc, Counterbore, Hole, Line, Part, Plate
from parts.shape import cut_area, mirrored, polygon
from tests.exporters.processes import write_samples
from tests.parts.samples import ALL, chain_end, disc, link, pin

PLATES = [part for part in ALL if isinstance(part.body, Plate)]
plates = pytest.mark.parametrize("part", PLATES, ids=lambda p: p.name)
both_units = pytest.mark.parametrize("units", ["metric", "us"])
Units = Literal["metric", "us"]
ALLOWED = {
    "CUT": {"LWPOLYLINE", "CIRCLE"},
    "PILOT": {"CIRCLE"},
    "DRILL": {"LINE"},
    "MARK": {"LINE", "ARC", "CIRCLE"},
    "NOTE": {"LINE", "CIRCLE", "TEXT"},
}


def plate_of(part: Part) -> Plate:
    assert isinstance(part.body, Plate)
    return part.body


def written_file(part: Part, folder: Path, units: Units = "metric", **more: Any) -> tuple[Path, list[Any]]:
    path = folder / f"{part.name}.dxf"
    write_plate(part, path, units=units, number="PIR-100", revision="B", **more)
    return path, list(readfile(path).modelspace())


def texts(entities: list[Any]) -> list[str]:
    return [e.dxf.text for e in entities if e.dxftype() == "TEXT"]


def points(entity: Any) -> list[Any]:
    """Points along a line or an arc."""
    return [entity.dxf.start, entity.dxf.end] if entity.dxftype() == "LINE" else list(entity.flattening(1e-7))


def on(entities: list[Any], layer: str, kind: str) -> list[Any]:
    return [e for e in entities if e.dxf.layer == layer and e.dxftype() == kind]


@plates
@both_units
def test_a_cut_file_passes_its_audit_and_keeps_its_layers(part: Part, units: Units, tmp_path: Path) -> None:
    path, entities = written_file(part, tmp_path, units)
    audit(path, part)
    document = readfile(path)
    assert document.dxfversion == "AC1015"
    assert document.header["$INSUNITS"] == {"metric": 4, "us": 1}[units]
    assert {e.dxf.layer for e in entities} <= set(ALLOWED)
    assert all(e.dxftype() in ALLOWED[e.dxf.layer] for e in entities)
    colors = [document.layers.get(name).color for name in ALLOWED]
    assert len(set(colors)) == len(colors)


@plates
@both_units
def test_outline_less_finished_holes_is_the_cut_area(part: Part, units: Units, tmp_path: Path) -> None:
    _, entities = written_file(part, tmp_path, units)
    scale = 1.0 if units == "metric" else 25.4
    circles = on(entities, "CUT", "CIRCLE")
    lines = on(entities, "CUT", "LWPOLYLINE")
    if lines:
        [outline] = lines
        assert outline.closed
        strokes = [shapely.LineString([(p.x, p.y) for p in points(e)]) for e in outline.virtual_entities()]
        [inside] = shapely.polygonize(shapely.set_precision(strokes, 1e-9)).geoms
        area = inside.area * scale**2
    else:
        area = pi * max(c.dxf.radius for c in circles) ** 2 * scale**2
    holes = sum(pi * h.diameter**2 / 4 for h in plate_of(part).holes)
    assert area - holes == pytest.approx(cut_area(plate_of(part)), rel=1e-6)


def test_the_front_hand_is_drawn_mirrored_and_its_text_is_not(tmp_path: Path) -> None:
    for part, sign in ((link("back", -1), 1), (link("front", 1), -1)):
        _, entities = written_file(part, tmp_path)
        [hole] = on(entities, "CUT", "CIRCLE")
        assert hole.dxf.center.y == pytest.approx(sign * 10.0)
        strokes = [e for e in on(entities, "MARK", "LINE") if e.dxf.start.x < 27.5]  # the P of PIR
        stem = min(strokes, key=lambda e: min(e.dxf.start.x, e.dxf.end.x))
        bottom = min(stem.dxf.start.y, stem.dxf.end.y)
        assert bottom == pytest.approx(-16.0 if sign > 0 else 12.0)
        bow = min(on(entities, "MARK", "ARC"), key=lambda e: e.dxf.center.x)
        assert bow.dxf.center.y == pytest.approx(bottom + 3.0)  # the bow of the P is above, not below
        assert any("Seen on the face towards the chain" in t for t in texts(entities))


def test_holes_are_cut_left_under_size_or_drilled(tmp_path: Path) -> None:
    _, entities = written_file(disc(), tmp_path)
    sizes = sorted(2 * e.dxf.radius for e in on(entities, "PILOT", "CIRCLE"))
    assert sizes == pytest.approx([22.0, 23.0])
    assert [2 * e.dxf.radius for e in on(entities, "CUT", "CIRCLE")] == pytest.approx([180.0])
    crosses = on(entities, "DRILL", "LINE")
    assert len(crosses) == 2 * (6 + 2 + 1)
    middles = {(round(m.x, 6), round(m.y, 6)) for m in (e.dxf.start.lerp(e.dxf.end) for e in crosses)}
    assert (30.0, 58.0) in middles
    said = " ".join(texts(entities))
    assert "crank_pin_hole: ream 24 H7 (+0.021/0), cut 22 first;" in said
    assert "press fit of the crank pin" in said
    assert "dowel_hole (2x): ream 6 H7 (+0.012/0), drill 5.8" in said
    assert "bolt_hole (6x): drill 13.5; bolt_sink: counterbore" in said


def test_how_a_hole_is_made() -> None:
    assert hole_work(Hole("h", (0, 0), 20.0), 12.0).way == "cut"
    assert hole_work(Hole("h", (0, 0), 8.9), 12.0).way == "drill"
    assert hole_work(Hole("h", (0, 0), 60.0, "H7"), 20.0).finish == "bore"
    drilled = hole_work(Hole("h", (0, 0), 8.0, "H7"), 12.0)
    assert (drilled.way, drilled.first_diameter, drilled.finish) == ("drill", 7.7, "ream")
    pilot = hole_work(Hole("h", (0, 0), 30.0, "H7"), 20.0)
    assert (pilot.way, pilot.first_diameter, pilot.finish) == ("pilot", 28.0, "ream")
    fitted = Hole("h", (0, 0), 30.0, "H7", "ream, press fit")
    assert hole_text(fitted, 20.0, "metric") == "ream 30 H7 (+0.021/0), cut 28 first; press fit"
    assert hole_text(fitted, 20.0, "us").startswith("ream 1.1811 (30 mm H7, +0.0008/0), cut 1.1024 first")
    assert size(12.7, "us") == "0.5"
    assert size(12.0, "metric") == "12"


def test_what_falls_short_is_said_and_shown(tmp_path: Path) -> None:
    _, entities = written_file(link(), tmp_path, falls_short=["least web 5 mm, 8 mm wanted"], notes=["Paint"])
    [warning] = [e for e in entities if e.dxftype() == "TEXT" and "FALLS SHORT" in e.dxf.text]
    assert warning.dxf.text == "FALLS SHORT: least web 5 mm, 8 mm wanted"
    assert warning.dxf.color == 1
    said = texts(entities)
    assert "PIR-100  Swing link, front hand  (swing_link_front)  revision B" in said
    assert "Paint." in said
    assert any("Material S355J2, plate 12 mm; thickness 12; quantity 1" in t for t in said)


def test_slots_and_far_counterbores_are_said(tmp_path: Path) -> None:
    _, entities = written_file(chain_end(), tmp_path)
    said = " ".join(texts(entities))
    assert "plate_slot_1: mill one slot, 5 wide about mid thickness" in said
    assert "plate_slot_2: mill two slots, 7 to 12 from mid thickness on either side" in said
    plate = plate_of(link())
    far = replace(plate, counterbores=(Counterbore("sink", (43.0, -8.0), 14.0, 3.0, "back"),))
    _, entities = written_file(replace(link(), body=far), tmp_path)
    assert "sink: counterbore 14 x 3 deep ON THE FAR FACE" in " ".join(texts(entities))
    dashed = [e for e in on(entities, "NOTE", "CIRCLE") if e.dxf.linetype == "DASHED"]
    assert [2 * e.dxf.radius for e in dashed] == pytest.approx([14.0])


def _laid_out(part: Part, units: Units) -> tuple[Notes, Any]:
    plate = plate_of(part)
    outline = mirrored(plate.outline) if part.away > 0 else plate.outline
    corners = polygon(outline, 0.05)
    lines = block_lines(
        part, plate, units=units, number="PIR-100", revision="A", notes=["A note"], falls_short=["a " * 80]
    )
    return lay_out(part, plate, corners, lines, units), corners


@plates
@both_units
def test_no_text_lies_on_another_or_on_the_part(part: Part, units: Units) -> None:
    notes, corners = _laid_out(part, units)
    boxes = [shapely.box(*t.box) for t in notes.texts]
    body = shapely.Polygon(corners)
    for (one, a), (other, b) in combinations(zip(notes.texts, boxes, strict=True), 2):
        assert a.intersection(b).area == 0, (one.text, other.text)
    assert all(box.intersection(body).area == 0 for box in boxes)


def test_the_same_bytes_in_processes_with_different_hash_seeds(tmp_path: Path) -> None:
    first, second = (write_samples(tmp_path / f"{seed}", "dxf", seed) for seed in (1, 2))
    assert first == second
    assert len(first.splitlines()) == 2 * len(PLATES)


def test_a_turned_part_has_no_cut_file(tmp_path: Path) -> None:
    with pytest.raises(TypeError, match="turned"):
        written_file(pin(), tmp_path)


def spoil_layer(space: Any) -> None:
    space.add_line((0, 0), (5, 0), dxfattribs={"layer": "CUT"})


def spoil_spline(space: Any) -> None:
    space.add_spline([(0, 0), (1, 1), (2, 0), (3, 1)], dxfattribs={"layer": "CUT"})


def spoil_twice(space: Any) -> None:
    hole = space.query("CIRCLE[layer=='PILOT']")[0]
    space.add_circle(hole.dxf.center, hole.dxf.radius, dxfattribs={"layer": "PILOT"})


def spoil_hole(space: Any) -> None:
    space.query("CIRCLE[layer=='PILOT']")[0].dxf.radius *= 1.2


def spoil_place(space: Any) -> None:
    hole = space.query("CIRCLE[layer=='CUT']")[0]
    hole.dxf.center = (hole.dxf.center.x + 0.01, hole.dxf.center.y)


def spoil_outline(space: Any) -> None:
    line = space.query("LWPOLYLINE")[0]
    x, y, *rest = line[0]
    line[0] = (x - 0.001, y - 0.001, *rest)


def spoil_closed(space: Any) -> None:
    space.query("LWPOLYLINE")[0].closed = False


@pytest.mark.parametrize(
    ("spoil", "fault"),
    [
        (spoil_layer, "a LINE on layer CUT"),
        (spoil_spline, "a SPLINE on layer CUT"),
        (spoil_twice, "a CIRCLE twice on layer PILOT"),
        (spoil_hole, "is not on layer PILOT at its place and size"),
        (spoil_place, "set_hole is not on layer CUT"),
        (spoil_outline, "the cut area is"),
        (spoil_closed, "the outline is not closed"),
    ],
    ids=lambda value: getattr(value, "__name__", None),
)
def test_the_audit_finds_what_is_wrong(spoil: Any, fault: str, tmp_path: Path) -> None:
    path, _ = written_file(link(), tmp_path)
    document = readfile(path)
    spoil(document.modelspace())
    document.saveas(path)
    with pytest.raises(CutFileError, match=re.escape(fault)):
        audit(path, link())


def test_a_file_of_another_part_fails_the_audit(tmp_path: Path) -> None:
    path, _ = written_file(link(), tmp_path)
    with pytest.raises(CutFileError):
        audit(path, chain_end())


def test_letters_are_lines_and_arcs_of_the_height_asked_for() -> None:
    text = "PIR-100 LINK B"
    strokes = text_strokes(text, (10.0, 20.0), 5.0, 0.0, "number")
    assert all(isinstance(s, Line | Arc) for s in strokes)
    ends = [p for s in strokes for p in (s.start, s.end)]
    assert min(y for _, y in ends) == pytest.approx(20.0)
    assert max(y for _, y in ends) == pytest.approx(25.0)
    assert max(x for x, _ in ends) <= 10.0 + text_width(text, 5.0) + 1e-9
    assert written("pir-é") == "PIR-?"
    turned = text_strokes(text, (0.0, 0.0), 5.0, pi / 2, "number")
    assert max(hypot(*s.start) for s in turned) == pytest.approx(max(p[0] for p in ends) - 10.0, rel=0.02)
