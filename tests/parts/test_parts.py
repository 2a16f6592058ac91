"""The made parts: sound, in their places, mirrored for a clockwise machine, and out of the chain's plane."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise
from math import cos, dist, hypot, sin

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from parts import places
from parts.bought import bought
from parts.clash import IN_CHAIN_PLANE
from parts.design import Design
from parts.lettering import text_width
from parts.outline import Counterbore, Hole, Line, Mark, Part, Placement, Plate, Point, Turned
from parts.registry import make_parts
from parts.shape import polygon, signed_area, sound
from parts.sizes import Sizes
from tests.parts.machines import Make, Rotation, Style, large, small, stack_of

KINDS = [(make, style) for make in (large, small) for style in ("post", "block")]
kinds = pytest.mark.parametrize(("make", "style"), KINDS, ids=[f"{m.__name__}-{s}" for m, s in KINDS])
both_ways = pytest.mark.parametrize("rotation", ["ccw", "cw"])


def parts_of(design: Design, sizes: Sizes) -> dict[str, Part]:
    return {part.name: part for part in make_parts(design, sizes, stack_of(design, sizes))}


def plate_of(part: Part) -> Plate:
    assert isinstance(part.body, Plate)
    return part.body


def turned_of(part: Part) -> Turned:
    assert isinstance(part.body, Turned)
    return part.body


def rounds(plate: Plate) -> list[Hole | Counterbore]:
    return [*plate.holes, *plate.counterbores]


def span(part: Part, place: Placement) -> tuple[float, float]:
    """z of the machine between which a copy lies."""
    z = place.at[2]
    if isinstance(part.body, Plate):
        low, high = sorted((z, z + part.away * part.body.thickness))
        return low, high
    return z + part.body.steps[0].z_from, z + part.body.steps[-1].z_to


def on_mover(place: Placement, point: Point) -> Point:
    c, s = cos(place.angle), sin(place.angle)
    return (place.at[0] + c * point[0] - s * point[1], place.at[1] + s * point[0] + c * point[1])


def box(mark: Mark) -> list[Point]:
    """Corners of a text mark."""
    width, c, s = text_width(mark.text, mark.height), cos(mark.direction), sin(mark.direction)
    return [
        (mark.at[0] + u * c - v * s, mark.at[1] + u * s + v * c)
        for u, v in ((0.0, 0.0), (width, 0.0), (width, mark.height), (0.0, mark.height))
    ]


@kinds
@both_ways
def test_every_plate_is_sound(make: Make, style: Style, rotation: Rotation) -> None:
    for part in parts_of(*make(rotation, style)).values():
        if isinstance(part.body, Plate):
            assert sound(part.body) == [], part.name
            assert signed_area(part.body.outline) > 0
        else:
            steps = part.body.steps
            assert all(a.z_to == pytest.approx(b.z_from) for a, b in pairwise(steps)), part.name
            assert all(s.z_to - s.z_from > s.chamfer_from + s.chamfer_to for s in steps), part.name
            assert all(s.diameter > part.body.bore for s in steps)


@kinds
def test_every_part_says_what_the_shop_needs(make: Make, style: Style) -> None:
    parts = parts_of(*make("ccw", style))
    assert len({part.color for part in parts.values()}) == len({part.key for part in parts.values()})
    for part in parts.values():
        assert part.title
        assert part.process
        assert part.material
        assert part.density > 1000
        assert part.stock.startswith(("plate ", "round bar "))
        assert part.quantity >= 1
        size = float(part.stock.split()[-2])
        if isinstance(part.body, Plate):
            assert size >= part.body.thickness
        else:
            assert size > max(s.diameter for s in part.body.steps)


@kinds
@given(beta=st.floats(-0.1, 0.15), reach=st.floats(0.55, 0.95), width=st.floats(0.8, 1.3), phase=st.floats(0.0, 1.0))
@settings(max_examples=15, deadline=None)
def test_a_clockwise_machine_has_mirrored_parts(
    make: Make, style: Style, beta: float, reach: float, width: float, phase: float
) -> None:
    def machine(rotation: Rotation) -> dict[str, Part]:
        design, sizes = make(rotation, style)
        there = reach * design.mechanism.link_length
        mechanism = replace(design.mechanism, seat_angle=beta, stop_reach=there)
        sizes = replace(
            sizes,
            link=replace(sizes.link, width=width * sizes.link.width),
            disc=replace(sizes.disc, bolt_phase=phase),
        )
        return parts_of(replace(design, mechanism=mechanism), sizes)

    flip = np.array([1.0, -1.0])
    ccw, cw = machine("ccw"), machine("cw")
    assert list(ccw) == list(cw)
    for name, part in ccw.items():
        other = cw[name]
        assert (part.hand, part.away, part.stock) == (other.hand, other.away, other.stock)
        for a, b in zip(part.placements, other.placements, strict=True):
            assert b.at == pytest.approx((a.at[0], -a.at[1], a.at[2]))
            assert (cos(b.angle), sin(b.angle)) == pytest.approx((cos(a.angle), -sin(a.angle)))
        if isinstance(part.body, Turned):
            assert part.body == other.body
            continue
        plate, image = plate_of(part), plate_of(other)
        assert signed_area(image.outline) == pytest.approx(signed_area(plate.outline))
        there, here = polygon(plate, 0.05) * flip, polygon(image, 0.05)
        gaps = np.hypot(*(there[:, None] - here[None]).transpose(2, 0, 1)).min(axis=1)
        assert gaps.max() < 1e-9
        ends = {s.name: s for s in image.outline}
        for segment in plate.outline:
            assert ends[segment.name].start == pytest.approx((segment.end[0], -segment.end[1]))
        assert [f.name for f in rounds(plate)] == [f.name for f in rounds(image)]
        for feature, its_image in zip(rounds(plate), rounds(image), strict=True):
            assert its_image.center == pytest.approx((feature.center[0], -feature.center[1]))
            assert its_image.diameter == feature.diameter


@kinds
@both_ways
@given(beta=st.floats(-0.15, 0.2), reach=st.floats(0.5, 0.98), width=st.floats(0.7, 1.5))
@settings(max_examples=15, deadline=None)
def test_the_seated_link_rests_on_the_stop(
    make: Make, style: Style, rotation: Rotation, beta: float, reach: float, width: float
) -> None:
    design, sizes = make(rotation, style)
    mechanism = replace(design.mechanism, seat_angle=beta, stop_reach=reach * design.mechanism.link_length)
    design = replace(design, mechanism=mechanism)
    sizes = replace(sizes, link=replace(sizes.link, width=width * sizes.link.width))
    parts = parts_of(design, sizes)
    turn = 1 if rotation == "ccw" else -1
    seated = turn * (np.pi + beta)

    def in_link(point: Point) -> Point:
        x, y = point[0] - mechanism.crank_radius, point[1]
        c, s = cos(seated), sin(seated)
        return (c * x + s * y, -s * x + c * y)

    flank = next(s for s in plate_of(parts["swing_link"]).outline if s.name == "stop_flank")
    assert isinstance(flank, Line)
    assert flank.start[1] == pytest.approx(flank.end[1])
    assert flank.start[1] == pytest.approx(-turn * sizes.link.width / 2)
    place = parts["stop"].placements[0]
    if style == "post":
        x, y = in_link((place.at[0], place.at[1]))
        contact = (x, y + turn * sizes.stop.diameter / 2)
    else:
        face = next(s for s in plate_of(parts["stop"]).outline if s.name == "contact_face")
        ends = [in_link(on_mover(place, end)) for end in (face.start, face.end)]
        assert ends[0][1] == pytest.approx(ends[1][1])
        assert abs(ends[0][0] - ends[1][0]) == pytest.approx(sizes.stop.length)
        contact = ((ends[0][0] + ends[1][0]) / 2, ends[0][1])
    assert contact == pytest.approx((mechanism.stop_reach, flank.start[1]), abs=1e-9)


@pytest.mark.parametrize("make", [large, small])
@both_ways
def test_the_block_sits_on_the_discs_holes(make: Make, rotation: Rotation) -> None:
    design, sizes = make(rotation, "block")
    parts = parts_of(design, sizes)
    disc = next(part for part in parts.values() if part.key == "crank_disc")
    holes = {h.name: h for h in plate_of(disc).holes}
    stop = parts["stop"]
    for hole in plate_of(stop).holes:
        for place in stop.placements:
            assert on_mover(place, hole.center) == pytest.approx(holes[f"stop_{hole.name}"].center)
    assert holes["stop_dowel_hole_1"].fit == "H7"
    assert holes["stop_bolt_hole_1"].fit is None
    assert "tap" in next(h for h in plate_of(stop).holes if h.name == "bolt_hole_1").note


@pytest.mark.parametrize("make", [large, small])
def test_pins_sit_in_their_holes(make: Make) -> None:
    design, sizes = make()
    parts = parts_of(design, sizes)
    disc = next(part for part in parts.values() if part.key == "crank_disc")
    holes = {h.name: h for h in plate_of(disc).holes}
    for key, hole in (("crank_pin", "crank_pin_hole"), ("stop", "stop_seat")):
        assert parts[key].placements[0].at[:2] == pytest.approx(holes[hole].center)
        shank = next(s for s in turned_of(parts[key]).steps if s.name == "press_shank")
        assert shank.diameter == holes[hole].diameter
        assert holes[hole].fit == "H7"
    eyes = {h.name: h for h in plate_of(parts["swing_link"]).holes}
    assert eyes["chain_pin_eye"].center == (design.mechanism.link_length, 0.0)
    assert parts["chain_pin"].placements[0].at[:2] == eyes["chain_pin_eye"].center
    end = {h.name: h for h in plate_of(parts["chain_end"]).holes}
    assert dist(end["chain_pin_eye"].center, end["chain_hole"].center) == sizes.chain_end.length


@kinds
@given(
    gap=st.floats(0.3, 3.0),
    link=st.floats(6.0, 40.0),
    disc=st.floats(8.0, 60.0),
    end=st.floats(0.4, 1.6),
    lower=st.floats(0.0, 5.0),
)
@settings(max_examples=25, deadline=None)
def test_nothing_made_enters_the_chains_plane_and_nothing_overlaps_along_a_pin(
    make: Make, style: Style, gap: float, link: float, disc: float, end: float, lower: float
) -> None:
    design, sizes = make("ccw", style)
    sizes = replace(
        sizes,
        plate_gap=gap,
        disc=replace(sizes.disc, thickness=disc),
        link=replace(sizes.link, thickness=link),
        stop=replace(sizes.stop, height=gap + link - lower),
        chain_end=replace(sizes.chain_end, width=end * sizes.chain_end.width),
    )
    stack = stack_of(design, sizes)
    parts = make_parts(design, sizes, stack)
    half = stack.chain_plane_width / 2
    spans: dict[str, list[tuple[float, float]]] = {}
    for part in parts:
        spans.setdefault(part.key, []).extend(span(part, place) for place in part.placements)
    for key, copies in spans.items():
        for low, high in copies:
            assert max(abs(low), abs(high)) <= stack.disc_back + 1e-9
            if key not in IN_CHAIN_PLANE:
                assert low >= half - 1e-9 or high <= -half + 1e-9, key
    for key in ("crank_disc", "swing_link", "stop", "crank_pin"):
        assert len(spans[key]) == len(stack.sides), key

    def towards_disc(low: float, high: float) -> float:
        return max(abs(low), abs(high)) if low * high > 0 else max(-low, 0.0)

    # the chain pin never rubs on a disc, and reaches through most of each link
    (low, high) = spans["chain_pin"][0]
    assert towards_disc(low, high) < stack.disc_face - stack.plate_gap or low == -high
    assert -low == pytest.approx(stack.link_face + link - 0.5)
    # rings fit between what they stand between
    for low, high in spans.get("crank_spacer", []):
        depths = sorted((abs(low), abs(high)))
        assert stack.link_face + link < depths[0] < depths[1] < stack.disc_face
    for low, high in spans.get("chain_spacer", []):
        depths = sorted((abs(low), abs(high)))
        assert sizes.chain_end.width / 2 < depths[0] < depths[1] < stack.link_face


def test_a_disc_with_sinks_comes_in_both_hands_and_one_without_does_not() -> None:
    design, sizes = large()
    parts = parts_of(design, sizes)
    assert {"crank_disc_back", "crank_disc_front"} <= set(parts)
    back, front = parts["crank_disc_back"], parts["crank_disc_front"]
    assert (back.away, front.away) == (-1, 1)
    assert plate_of(back).outline == plate_of(front).outline
    assert plate_of(back).holes == plate_of(front).holes
    plain = parts_of(design, replace(sizes, disc=replace(sizes.disc, counterbore_diameter=0.0)))
    assert plain["crank_disc"].quantity == 2
    assert plain["swing_link"].quantity == 2
    assert {span(plain["crank_disc"], p) for p in plain["crank_disc"].placements} == {(-60.5, -40.5), (40.5, 60.5)}


def test_a_crank_pins_head_lies_below_the_links_face() -> None:
    design, sizes = small()
    stack = stack_of(design, sizes)
    parts = parts_of(design, sizes)
    sink = plate_of(parts["swing_link"]).counterbores[0]
    pin = parts["crank_pin"]
    head = next(s for s in turned_of(pin).steps if s.name == "head")
    z = pin.placements[0].at[2]
    assert abs(z + head.z_to) >= stack.link_face + 0.2
    assert abs(z + head.z_from) < stack.link_face + sink.depth
    assert head.diameter < sink.diameter
    shank = next(s for s in turned_of(pin).steps if s.name == "press_shank")
    assert z + shank.z_from == pytest.approx(-stack.disc_back)
    assert z + shank.z_to == pytest.approx(-stack.disc_face)


def test_the_cantilevered_chain_pin_holds_the_chain_end_in_the_middle() -> None:
    design, sizes = small()
    parts = parts_of(design, sizes)
    steps = {s.name: s for s in turned_of(parts["chain_pin"]).steps}
    half = sizes.chain_end.width / 2
    assert list(steps) == ["press_seat", "collar", "journal", "ring_groove", "end_stub"]
    assert 0 < -steps["journal"].z_from - half < 0.25
    assert 0 < steps["journal"].z_to - half < 0.25
    assert steps["collar"].z_from == pytest.approx(-stack_of(design, sizes).link_face)
    assert "chain_spacer" not in parts


def test_a_narrow_chain_end_in_double_shear_gets_rings() -> None:
    design, sizes = large()
    assert "chain_spacer" not in parts_of(design, sizes)
    narrow = replace(sizes, chain_end=replace(sizes.chain_end, width=25.0, slots=((0.0, 3.0),)))
    ring = parts_of(design, narrow)["chain_spacer"]
    assert ring.quantity == 2
    assert turned_of(ring).bore > sizes.chain_pin.middle_diameter
    assert turned_of(ring).steps[0].z_to - turned_of(ring).steps[0].z_from == pytest.approx(6.9)


def test_the_chain_ends_slots_reach_from_the_chain_side() -> None:
    design, sizes = large()
    plate = plate_of(parts_of(design, sizes)["chain_end"])
    tip = max(x for x, _ in polygon(plate, 0.01))
    assert [(s.z_from, s.z_to) for s in plate.slots] == list(sizes.chain_end.slots)
    assert all(tip - s.x_from == pytest.approx(sizes.chain_end.slot_depth) for s in plate.slots)
    design, sizes = small()
    assert plate_of(parts_of(design, sizes)["chain_end"]).slots == ()
    wide = replace(sizes, chain_end=replace(sizes.chain_end, width=12.0))
    slot = plate_of(parts_of(design, wide)["chain_end"]).slots[0]
    assert (slot.z_from, slot.z_to) == (sizes.chain_end.tongue_width / 2, 6.0)


@kinds
@both_ways
def test_numbers_are_etched_where_there_is_room(make: Make, style: Style, rotation: Rotation) -> None:
    design, sizes = make(rotation, style)
    for part in parts_of(design, sizes).values():
        if part.key not in ("crank_disc", "swing_link"):
            continue
        plate = plate_of(part)
        marks = {m.name: m for m in plate.marks}
        text = marks["number"]
        assert text.text.startswith("PIR-100")
        assert text.text.endswith(" A")
        assert text.height >= 3.0
        corners = np.array(box(text))
        edge = polygon(plate, 0.01)
        steps = np.linspace(0.0, 1.0, 41)[:, None]
        around = np.concatenate(
            [a + steps * (b - a) for a, b in zip(corners, np.roll(corners, -1, axis=0), strict=True)]
        )
        inside = np.concatenate([around, corners.mean(axis=0)[None]])
        for feature in rounds(plate):
            apart = np.hypot(*(inside - feature.center).T) - feature.diameter / 2
            assert apart.min() >= 2.0 - 1e-6, feature.name
        assert np.hypot(*(around[:, None] - edge[None]).transpose(2, 0, 1)).min() >= 2.0 - 0.01
    disc = next(part for part in parts_of(design, sizes).values() if part.key == "crank_disc")
    index = next(m for m in plate_of(disc).marks if m.name == "index")
    ((a, b),) = index.strokes
    assert a[1] == b[1] == 0.0
    assert sizes.disc.outer_diameter / 2 - 1.0 < b[0] < sizes.disc.outer_diameter / 2


def test_a_part_without_room_for_its_number_says_so() -> None:
    design, sizes = small()
    long = replace(design, identity=replace(design.identity, number="X" * 40))
    for part in parts_of(long, sizes).values():
        if part.key in ("crank_disc", "swing_link"):
            assert any("tag it" in note for note in part.notes)
            assert all(not m.text for m in plate_of(part).marks)


def test_the_arrow_points_at_the_flank_that_meets_the_stop() -> None:
    sides: tuple[tuple[Rotation, int], ...] = (("ccw", -1), ("cw", 1))
    for rotation, side in sides:
        design, sizes = large(rotation)
        arrow = next(m for m in plate_of(parts_of(design, sizes)["swing_link"]).marks if m.name == "stop_side")
        tips = {stroke[0] for stroke in arrow.strokes}
        assert len(tips) == 1
        ((x, y),) = tips
        assert x == design.mechanism.stop_reach
        assert side * y > 0
        assert all(abs(end[1]) < abs(y) for _, end in arrow.strokes)


def test_bolts_count_from_the_phase_in_the_direction_of_rotation() -> None:
    design, sizes = large("cw")
    disc = plate_of(parts_of(design, sizes)["crank_disc_back"])
    first = next(h for h in disc.holes if h.name == "hub_bolt_hole_1")
    radius, phase = sizes.disc.bolt_circle / 2, sizes.disc.bolt_phase
    assert first.center == pytest.approx((radius * cos(phase), -radius * sin(phase)))
    assert all(hypot(*at) == pytest.approx(radius) for at in places.hub_bolts(sizes.disc))


def test_what_is_bought_follows_the_stack_and_the_stop() -> None:
    def rows(design: Design, sizes: Sizes) -> dict[str, int]:
        return {b.key: b.quantity for b in bought(design, sizes, stack_of(design, sizes))}

    twin, single = rows(*large("ccw", "block")), rows(*small())
    assert twin["hub_bolt"] == 12
    assert (twin["stop_dowel"], twin["stop_bolt"]) == (4, 4)
    assert "retaining_ring" not in twin
    assert single["hub_bolt"] == 4
    assert single["retaining_ring"] == 1
    assert "stop_bolt" not in single
    assert {"chain", "chain_connecting_pin", "spring", "sheave", "hub", "motor"} <= set(twin) & set(single)


@kinds
def test_solids_have_the_records_volume_and_a_name_on_every_face(make: Make, style: Style) -> None:
    from parts.shape import volume
    from parts.solids import named_faces, solid

    for part in parts_of(*make("cw", style)).values():
        shape = solid(part)
        assert shape.isValid()
        assert shape.Volume() == pytest.approx(volume(part), rel=1e-6), part.name
        faces = named_faces(part, shape)
        features = part.body.holes if isinstance(part.body, Plate) else part.body.steps
        assert {f.name for f in features} <= set(faces), part.name
