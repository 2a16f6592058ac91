"""Solids from the records: their volume and place, and a name for every face."""

from __future__ import annotations

import subprocess
import sys

import pytest

from parts.outline import Part, Plate, Turned
from parts.shape import mass_properties
from parts.solids import named_faces, solid
from tests.parts.samples import ALL, chain_end, disc, link, pin, spacer

all_parts = pytest.mark.parametrize("part", ALL, ids=lambda p: p.name)


@all_parts
def test_volume_centre_and_extent_are_those_of_the_records(part: Part) -> None:
    shape, records = solid(part), mass_properties(part)
    assert shape.ShapeType() == "Solid"
    assert shape.isValid()
    assert shape.Volume() == pytest.approx(records.volume, rel=1e-9)
    assert shape.Center().toTuple() == pytest.approx(records.center, abs=1e-9)
    box = shape.BoundingBox()
    if isinstance(part.body, Plate):
        low, high = sorted((0.0, part.away * part.body.thickness))
        assert (box.zmin, box.zmax) == pytest.approx((low, high), abs=1e-5)


@all_parts
def test_every_face_has_a_name_and_every_feature_a_face(part: Part) -> None:
    shape = solid(part)
    names = named_faces(part, shape)
    assert len(names) == len(shape.Faces())
    body = part.body
    if isinstance(body, Plate):
        wanted = {f.name for f in (*body.outline, *body.holes, *body.counterbores)} | {"chain_face", "back_face"}
        wanted |= {f"{b.name}_floor" for b in body.counterbores} | {f"{s.name}_floor" for s in body.slots}
    else:
        assert isinstance(body, Turned)
        wanted = {s.name for s in body.steps} | {"end_from", "end_to"}
        wanted |= {f"{s.name}_chamfer_from" for s in body.steps if s.chamfer_from}
        wanted |= {f"{s.name}_chamfer_to" for s in body.steps if s.chamfer_to}
    assert wanted <= set(names)


@pytest.mark.parametrize("away", [-1, 1])
def test_faces_lie_where_their_names_say(away: int) -> None:
    part = link("back", away)
    faces = named_faces(part, solid(part))
    assert faces["chain_face"].Center().z == pytest.approx(0.0)
    assert faces["chain_face"].normalAt().z == pytest.approx(-away)
    assert faces["back_face"].Center().z == pytest.approx(12.0 * away)
    assert faces["left_flank"].Center().toTuple() == pytest.approx((43.0, 22.0, 6.0 * away))
    assert faces["crank_pin_sink_floor"].Center().z == pytest.approx(4.0 * away)
    assert faces["chain_pin_eye"].Center().x == pytest.approx(86.0)


def test_slots_divide_a_face_and_its_pieces_count_up_in_z() -> None:
    part = chain_end()
    faces = named_faces(part, solid(part))
    pieces = [faces[n].Center().z for n in ("chain_face_end", *(f"chain_face_end_{i}" for i in (2, 3, 4)))]
    assert pieces == sorted(pieces)
    assert pieces == pytest.approx([3.0, 13.25, 22.75, 33.0])
    assert faces["plate_slot_1_floor"].Center().toTuple() == pytest.approx((32.0, 0.0, 18.0))


def test_steps_of_one_diameter_stay_two_faces() -> None:
    faces = named_faces(pin(), solid(pin()))
    assert faces["press"].Center().z == pytest.approx(-9.5)  # its chamfer takes 1 mm
    assert faces["journal"].Center().z == pytest.approx(7.0)
    assert faces["collar_shoulder_from"].normalAt().z == pytest.approx(-1.0)
    assert "bore" in named_faces(spacer(), solid(spacer()))


def test_a_face_that_belongs_to_no_feature_is_refused() -> None:
    with pytest.raises(ValueError, match="belongs to no named feature"):
        named_faces(disc(), solid(link()))


def test_importing_does_not_load_the_solid_modeller() -> None:
    code = "import sys, parts.solids, parts.shape, exporters.step; print('cadquery' in sys.modules)"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "False"
