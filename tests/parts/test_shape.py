"""What follows from outlines and profiles, held against shapely, closed forms and each other."""

from __future__ import annotations

from dataclasses import replace
from math import cos, dist, isclose, pi, sin, sqrt, tau

import numpy as np
import pytest
import shapely
from hypothesis import assume, given
from hypothesis import strategies as st

from parts.outline import Arc, Counterbore, Hole, Line, Part, Plate, Point, Segment, Slot, Step, Turned
from parts.segments import circle, crossings, distance, length
from parts.shape import (
    area_beyond,
    centroid,
    cut_area,
    edge_distance,
    is_inside,
    least_web,
    mass,
    mass_properties,
    mirrored,
    moments,
    perimeter,
    plate_volume,
    polygon,
    signed_area,
    sound,
    turned_volume,
    volume,
)
from tests.parts.samples import ALL, chain_end, disc, link, pin, spacer, stadium

Outline = tuple[Segment, ...]


def plate_of(part: Part) -> Plate:
    assert isinstance(part.body, Plate)
    return part.body


def area_of(outline: Outline, tolerance: float = 1e-4) -> shapely.Polygon:
    return shapely.Polygon(polygon(outline, tolerance))


@st.composite
def outlines(draw: st.DrawFn) -> Outline:
    """Star-shaped outlines of lines and of arcs that bulge or are hollow, all round the origin."""
    n = draw(st.integers(4, 9))
    reaches = draw(st.lists(st.floats(20, 60), min_size=n, max_size=n))
    bends = draw(st.lists(st.sampled_from([-0.25, 0.0, 0.0, 0.2, 0.35]), min_size=n, max_size=n))
    shift = draw(st.tuples(st.floats(-15, 15), st.floats(-15, 15)))
    corners = [(shift[0] + r * cos(tau * i / n), shift[1] + r * sin(tau * i / n)) for i, r in enumerate(reaches)]
    found: list[Segment] = []
    for i, (a, bend) in enumerate(zip(corners, bends, strict=True)):
        b = corners[(i + 1) % n]
        if bend == 0.0:
            found.append(Line(a, b, f"side_{i}"))
        else:
            found.append(_arc(a, b, bend, f"side_{i}"))
    assume(not sound(Plate(tuple(found), (), 10.0)))  # at a sharp corner hollow sides may cross
    return tuple(found)


def _arc(a: Point, b: Point, bulge: float, name: str) -> Arc:
    """The arc from a to b whose height is ``bulge`` times half the chord, to the right of it when positive."""
    chord = dist(a, b)
    r = chord * (1 + bulge**2) / (4 * abs(bulge))
    off = sqrt(max(0.0, r * r - chord * chord / 4)) * (1 if bulge > 0 else -1)
    nx, ny = -(b[1] - a[1]) / chord, (b[0] - a[0]) / chord
    center = ((a[0] + b[0]) / 2 + off * nx, (a[1] + b[1]) / 2 + off * ny)
    return Arc(a, b, center, bulge > 0, name)


@given(outlines())
def test_area_centroid_and_perimeter_agree_with_a_fine_polygon(outline: Outline) -> None:
    fine = area_of(outline)
    assert signed_area(outline) == pytest.approx(fine.area, abs=1e-4 * perimeter(outline))
    assert centroid(outline) == pytest.approx((fine.centroid.x, fine.centroid.y), abs=1e-3)
    assert perimeter(outline) == pytest.approx(fine.exterior.length, rel=1e-5)


@given(outlines(), st.floats(-80, 80))
def test_area_beyond_agrees_with_a_clipped_polygon(outline: Outline, x: float) -> None:
    fine = area_of(outline)
    beyond = shapely.intersection(fine, shapely.box(x, -200, 200, 200))
    off = 1e-4 * perimeter(outline)
    assert area_beyond(outline, x) == pytest.approx(beyond.area, abs=off)
    low = signed_area(outline) - area_beyond(outline, x)
    assert low == pytest.approx(fine.area - beyond.area, abs=off)


@given(outlines())
def test_a_mirrored_outline_keeps_its_area_and_runs_counter_clockwise(outline: Outline) -> None:
    there = mirrored(outline)
    assert signed_area(there) == pytest.approx(signed_area(outline), rel=1e-12)
    assert centroid(there) == pytest.approx((centroid(outline)[0], -centroid(outline)[1]), abs=1e-9)
    assert {s.name for s in there} == {s.name for s in outline}
    again = mirrored(there)
    assert [(s.start, s.end) for s in again] == [(s.start, s.end) for s in outline]


@given(outlines(), st.floats(-12, 12), st.floats(-12, 12))
def test_rays_agree_with_a_fine_polygon(outline: Outline, x: float, y: float) -> None:
    fine = area_of(outline)
    directions = np.linspace(0, tau, 37)[:-1] + 0.01
    if not fine.contains(shapely.Point(x, y)) or fine.exterior.distance(shapely.Point(x, y)) < 0.5:
        return
    found = edge_distance(Plate(outline, (), 10.0), (x, y), directions)
    for direction, value in zip(directions, found, strict=True):
        ray = shapely.LineString([(x, y), (x + 300 * cos(direction), y + 300 * sin(direction))])
        expected = fine.exterior.intersection(ray).distance(shapely.Point(x, y))
        # Where the ray all but touches the outline the polygon's chords move the point along it.
        assert value == pytest.approx(expected, abs=0.05)


@given(outlines(), st.integers(0, 2**31))
def test_rays_stop_at_the_nearest_hole(outline: Outline, seed: int) -> None:
    """Circles are met apart from the outline's arcs: each ray by itself, by the closed form of one circle."""
    rng = np.random.default_rng(seed)
    holes = tuple(
        Hole(f"hole_{i}", (float(x), float(y)), float(d))
        for i, (x, y, d) in enumerate(zip(*rng.uniform(-70, 70, (2, 6)), rng.uniform(1, 30, 6), strict=True))
    )
    directions = rng.uniform(-4, 4, (3, 5))
    plate = Plate(outline, holes, 10.0)
    found = edge_distance(plate, (0.0, 0.0), directions, holes=True, skip=("hole_0",))
    bare = edge_distance(plate, (0.0, 0.0), directions)
    assert found.shape == directions.shape
    for at, direction in np.ndenumerate(directions):
        reaches = [float(bare[at])]
        for hole in holes[1:]:
            along = hole.center[0] * cos(direction) + hole.center[1] * sin(direction)
            square = (hole.diameter / 2) ** 2 - (dist((0, 0), hole.center) ** 2 - along**2)
            if square >= 0:
                reaches += [s for s in (along - sqrt(square), along + sqrt(square)) if s > 0]
        assert found[at] == pytest.approx(min(reaches), rel=1e-9, abs=1e-6)


@given(outlines(), st.floats(-70, 70), st.floats(-70, 70))
def test_inside_agrees_with_a_fine_polygon(outline: Outline, x: float, y: float) -> None:
    fine, point = area_of(outline), shapely.Point(x, y)
    assume(fine.exterior.distance(point) > 1e-3)
    assert is_inside(outline, (x, y)) == fine.contains(point)


@given(outlines())
def test_the_two_ways_to_an_area_agree(outline: Outline) -> None:
    assert signed_area(outline) == pytest.approx(moments(outline).area, rel=1e-12)


def test_a_point_on_an_arcs_chord_is_inside() -> None:
    """An eye's centre lies on the chord of the half circle round it, and on that of the whole circle of a disc."""
    for shift in (0.0, 1e-16, -1e-16):
        assert is_inside(stadium(86.0, 22.0), (shift, shift))
        assert is_inside(stadium(86.0, 22.0), (86.0 + shift, -shift))
    assert not is_inside(stadium(86.0, 22.0), (-22.1, 0.0))
    round_ = circle((3.0, -4.0), 10.0, "round")
    assert is_inside(round_, (3.0, -4.0))
    assert is_inside(mirrored(round_), (3.0, 4.0))
    assert not is_inside(round_, (8.1, -4.0))


@given(outlines(), st.floats(0.01, 2.0))
def test_a_containing_polygon_holds_the_shape(outline: Outline, tolerance: float) -> None:
    fine, around = area_of(outline, 1e-3), shapely.Polygon(polygon(outline, tolerance, containing=True))
    assert around.buffer(1.1e-3).contains(fine)
    assert around.difference(fine.buffer(tolerance + 1e-3, quad_segs=64)).area < 1e-6


def test_a_polygon_keeps_its_tolerance() -> None:
    outline = stadium(86.0, 22.0)
    exact = signed_area(outline)
    for tolerance in (1.0, 0.1, 0.01):
        corners = polygon(outline, tolerance)
        assert len(np.unique(np.round(corners, 9), axis=0)) == len(corners)
        assert 0 < exact - shapely.Polygon(corners).area < tolerance * perimeter(outline)


def test_a_stadium_in_closed_form() -> None:
    outline = stadium(86.0, 22.0)
    assert signed_area(outline) == pytest.approx(86 * 44 + pi * 22**2, rel=1e-14)
    assert perimeter(outline) == pytest.approx(2 * 86 + 2 * pi * 22, rel=1e-14)
    assert centroid(outline) == pytest.approx((43.0, 0.0), abs=1e-12)
    assert area_beyond(outline, 0.0) == pytest.approx(86 * 44 + pi * 22**2 / 2, rel=1e-14)


def test_second_moments_of_a_circle_off_its_origin() -> None:
    m = moments(circle((3.0, -4.0), 10.0, "round"))
    area = pi * 25
    assert m.area == pytest.approx(area)
    assert m.xx == pytest.approx(area * (9 + 25 / 4))
    assert m.yy == pytest.approx(area * (16 + 25 / 4))
    assert m.xy == pytest.approx(area * -12)


def test_a_hole_under_a_counterbore_is_taken_off_once() -> None:
    square: Outline = tuple(
        Line(a, b, f"side_{i}")
        for i, (a, b) in enumerate([((0, 0), (40, 0)), ((40, 0), (40, 40)), ((40, 40), (0, 40)), ((0, 40), (0, 0))])
    )
    hole, bore = Hole("h", (20, 20), 10.0), Counterbore("b", (20, 20), 16.0, 4.0, "back")
    plate = Plate(square, (hole,), 12.0, (bore,))
    assert plate_volume(plate) == pytest.approx(1600 * 12 - pi * 25 * 12 - pi * (64 - 25) * 4)
    # A hole half inside the counterbore: what they share counts once, however it is asked for.
    apart = replace(plate, holes=(replace(hole, center=(28.0, 20.0)),))
    fine = [shapely.Point(*f.center).buffer(f.diameter / 2, quad_segs=2000) for f in (apart.holes[0], bore)]
    shared = fine[0].intersection(fine[1]).area
    expected = 1600 * 12 - pi * 25 * 12 - (pi * 64 - shared) * 4
    assert plate_volume(apart) == pytest.approx(expected, rel=1e-7)


def test_slots_are_taken_off_on_both_sides_of_the_middle() -> None:
    plate = plate_of(chain_end())
    gone = area_beyond(plate.outline, 32.0) - pi * 14**2 / 4  # the hole at x = 55 lies beyond x = 32
    whole = replace(plate, slots=())
    assert plate_volume(whole) - plate_volume(plate) == pytest.approx(gone * 2 * (2.5 + 5.0))
    assert plate_volume(whole) == pytest.approx(cut_area(plate) * 36.0)


def test_turned_parts_in_closed_form() -> None:
    ring = spacer()
    chamfer = pi * 0.25 * (15.0 - 0.5 / 3)
    assert volume(ring) == pytest.approx(pi * (15**2 - 10.25**2) * 8 - 2 * chamfer)
    body = Turned((Step("a", 0, 10, 20.0, chamfer_from=2.0), Step("b", 10, 15, 12.0)))
    cut = pi * 4 * (10 - 2 / 3)
    assert turned_volume(body) == pytest.approx(pi * 100 * 10 + pi * 36 * 5 - cut)
    assert mass(pin()) == pytest.approx(volume(pin()) * 7.85e-6)


def test_inertia_of_a_round_bar() -> None:
    bar = replace(pin(), body=Turned((Step("bar", -4.0, 16.0, 30.0),)))
    found = mass_properties(bar)
    assert found.inertia_z == pytest.approx(found.mass * 15**2 / 2)
    assert found.center == pytest.approx((0.0, 0.0, 6.0))


@pytest.mark.parametrize("hand", [-1, 1])
def test_the_body_lies_on_its_side_of_the_chain_face(hand: int) -> None:
    assert mass_properties(disc("back", hand)).center[2] * hand == pytest.approx(10.102, abs=1e-3)


def test_edges_seen_from_a_hole() -> None:
    plate = plate_of(link())
    directions = np.array([0.0, pi / 2, pi])
    assert edge_distance(plate, (0.0, 0.0), directions) == pytest.approx([86 + 22, 22, 22])
    near = edge_distance(plate, (0.0, 0.0), directions, holes=True, skip=("crank_pin_eye",))
    assert near == pytest.approx([86 - 10, 22, 22])
    assert np.isinf(edge_distance(plate, (200.0, 0.0), np.array([0.0])))[0]


def test_webs_have_the_names_of_what_they_lie_between() -> None:
    webs = {(w.one, w.other): w.thickness for w in least_web(plate_of(link()))}
    assert webs["crank_pin_sink", "right_flank"] == pytest.approx(5.0)
    assert webs["crank_pin_eye", "chain_pin_eye"] == pytest.approx(86 - 22)
    assert ("crank_pin_eye", "crank_pin_sink") not in webs
    assert least_web(plate_of(link()))[0].thickness == min(webs.values())


@pytest.mark.parametrize("part", [p for p in ALL if isinstance(p.body, Plate)], ids=lambda p: p.name)
def test_the_samples_are_sound(part: Part) -> None:
    assert sound(plate_of(part)) == []


SOUND = Plate(stadium(86.0, 22.0), (Hole("eye", (0.0, 0.0), 20.0),), 12.0)
_LOWER, _FAR, _UPPER, _NEAR = SOUND.outline
_BOW_TIE: Outline = (
    Line((0, 0), (40, 30), "a"),
    Line((40, 30), (40, 0), "b"),
    Line((40, 0), (0, 31), "c"),
    Line((0, 31), (0, 0), "d"),
)


@pytest.mark.parametrize(
    ("plate", "fault"),
    [
        (replace(SOUND, outline=(_LOWER, _FAR, _UPPER)), "a gap of 44 mm"),
        (replace(SOUND, outline=(replace(_LOWER, end=(86.0, -22.01)), _FAR, _UPPER, _NEAR)), "a gap of 0.01"),
        (replace(SOUND, outline=(Line((0, -22), (0, -22), "dot"), *SOUND.outline)), "dot has no length"),
        (
            replace(
                SOUND,
                outline=(Arc((0, -22), (86, -22), (20, 0), True, "skew"), _FAR, _UPPER, _NEAR),
            ),
            "skew are not equally far",
        ),
        (replace(SOUND, outline=_BOW_TIE, holes=()), "a and c meet at"),
        (replace(SOUND, holes=(Hole("eye", (0, 15), 20.0),)), "eye and left_flank run into each other by 3"),
        (replace(SOUND, holes=(Hole("eye", (-50, 0), 20.0),)), "eye and near_eye run into each other"),
        (
            replace(SOUND, holes=(*SOUND.holes, Hole("other", (15, 0), 20.0))),
            "eye and other run into each other by 5 mm",
        ),
        (replace(SOUND, holes=(*SOUND.holes, Hole("eye", (60, 0), 5.0))), "the name eye is used twice"),
        (
            replace(SOUND, counterbores=(Counterbore("sink", (0, 0), 30.0, 12.0, "chain"),)),
            "sink is 12 mm deep in a plate of 12 mm",
        ),
        (replace(SOUND, slots=(Slot("slot", 200.0, 0.0, 2.0),)), "slot does not cut the plate"),
    ],
)
def test_what_is_not_sound_is_said(plate: Plate, fault: str) -> None:
    assert any(fault in text for text in sound(plate)), sound(plate)


def test_a_clockwise_outline_is_said() -> None:
    backwards: Outline = tuple(
        Line(s.end, s.start, s.name) if isinstance(s, Line) else Arc(s.end, s.start, s.center, not s.ccw, s.name)
        for s in reversed(SOUND.outline)
    )
    assert signed_area(backwards) == pytest.approx(-signed_area(SOUND.outline))
    assert "outline: runs clockwise" in sound(replace(SOUND, outline=backwards))


def test_one_circle_is_an_outline() -> None:
    outline = circle((3.0, 4.0), 50.0, "rim")
    plate = Plate(outline, (Hole("bore", (3.0, 4.0), 20.0),), 8.0)
    assert sound(plate) == []
    assert plate_volume(plate) == pytest.approx(pi / 4 * (2500 - 400) * 8)
    assert isclose(length(outline[0]), 50 * pi)
    assert is_inside(outline, (20.0, 4.0))
    assert not is_inside(outline, (29.0, 4.0))


def test_segments_meet_where_they_should() -> None:
    line, arc = Line((-10, 3), (10, 3), "line"), Arc((5, 0), (-5, 0), (0, 0), True, "arc")
    assert sorted(crossings(line, arc)) == [pytest.approx((-4, 3)), pytest.approx((4, 3))]
    assert crossings(Line((-10, -3), (10, -3), "line"), arc) == []
    assert crossings(Line((0, 0), (4, 0), "a"), Line((6, 0), (3, 0), "b")) == [pytest.approx((3.5, 0))]
    assert crossings(arc, Arc((6, 4), (-6, 4), (0, 4), True, "high")) == []
    assert len(crossings(arc, Arc((6, 4), (-6, 4), (0, 4), False, "low"))) == 2
    assert crossings(arc, Arc((8, 0), (0, 0), (4, 0), True, "next")) == [pytest.approx((3.125, 3.903124))]
    assert distance(arc, (0.0, -1.0)) == pytest.approx(sqrt(26))
    assert distance(arc, (0.0, 2.0)) == pytest.approx(3.0)
