"""Where the link meets the back of its stop: closed forms, the drawn outlines themselves, and the mirror image."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
import shapely
from hypothesis import given, settings
from hypothesis import strategies as st

from parts.assembly import placed, pose
from parts.design import Design
from parts.outline import Plate
from parts.registry import make_parts
from parts.shape import polygon
from parts.sizes import Sizes
from parts.stop_back import BackContact, back_contact
from tests.parts.machines import Make, Rotation, Style, large, small, stack_of

machines = pytest.mark.parametrize("make", [large, small])
both_ways = pytest.mark.parametrize("rotation", ["ccw", "cw"])
styles = pytest.mark.parametrize("style", ["post", "block"])


def found(design: Design, sizes: Sizes) -> BackContact:
    return back_contact(make_parts(design, sizes, stack_of(design, sizes)), design, sizes)


@settings(max_examples=40, deadline=None)
@given(
    beta=st.floats(-0.2, 0.3), reach=st.floats(50.0, 82.0), width=st.floats(20.0, 50.0), diameter=st.floats(8.0, 36.0)
)
def test_a_post_takes_up_twice_the_angle_of_link_and_post_at_the_stop_reach(
    beta: float, reach: float, width: float, diameter: float
) -> None:
    """γ = 2 atan((w/2 + R)/d): both contacts lie at d, as the post's middle is as far off the axis at both."""
    design, sizes = large()
    design = replace(design, mechanism=replace(design.mechanism, seat_angle=beta, stop_reach=reach))
    sizes = replace(
        sizes, link=replace(sizes.link, width=width), stop=replace(sizes.stop, diameter=diameter)
    )  # fmt: skip
    contact = found(design, sizes)
    gamma = 2.0 * math.atan((width + diameter) / 2.0 / reach)
    assert contact.link_angle == pytest.approx(beta + 2.0 * math.pi - gamma, abs=1e-9)
    assert contact.reach == pytest.approx(reach, abs=1e-6)
    assert not contact.on_edge


@machines
@both_ways
def test_a_block_is_met_at_the_corner_that_stands_furthest_out(make: Make, rotation: Rotation) -> None:
    """Each corner by itself: seen from the crank pin at D it leaves the axis w/2 aside at asin(w/2D); the first counts."""
    design, sizes = make(rotation, "block")
    m, half = design.mechanism, sizes.link.width / 2.0
    stop = sizes.stop
    cut = min(stop.length, stop.width) / 10.0
    # corners along the seated link from the crank pin, and across it, away from the flank
    middle = half + stop.width / 2.0
    corners = [
        (m.stop_reach + along, middle + across)
        for along, across in (
            (cut - stop.length / 2.0, stop.width / 2.0), (stop.length / 2.0 - cut, stop.width / 2.0),
            (stop.length / 2.0, stop.width / 2.0 - cut), (-stop.length / 2.0, stop.width / 2.0 - cut),
            (stop.length / 2.0, -stop.width / 2.0), (-stop.length / 2.0, -stop.width / 2.0),
        )
    ]  # fmt: skip
    angles = []
    for x, y in corners:
        away = math.hypot(x, y)
        if math.sqrt(away**2 - half**2) <= m.link_length:
            opening = math.asin(half / away)
        elif away > m.link_length + half:
            continue
        else:  # beyond the link's straight flank its round end meets it
            opening = math.acos((m.link_length**2 + away**2 - half**2) / (2.0 * m.link_length * away))
        angles.append(math.atan2(y, x) + opening)
    contact = found(design, sizes)
    assert contact.link_angle == pytest.approx(m.seat_angle + 2.0 * math.pi - max(angles), abs=1e-7)
    assert contact.on_edge


@machines
@both_ways
@styles
def test_the_drawn_outlines_touch_there_and_not_before(make: Make, rotation: Rotation, style: Style) -> None:
    design, sizes = make(rotation, style)
    parts = make_parts(design, sizes, stack_of(design, sizes))
    contact = back_contact(parts, design, sizes)
    turn = 1.0 if rotation == "ccw" else -1.0

    def apart(link_angle: float) -> float:
        areas = {}
        for copy in placed(parts, pose(design, 0.3, 0.3 + turn * (math.pi + link_angle), 0.0)):
            x, y, _, angle = copy.at
            if copy.part.key == "stop" and style == "post":
                areas["stop"] = shapely.Point(x, y).buffer(sizes.stop.diameter / 2.0, quad_segs=256)
            elif copy.part.key in ("stop", "swing_link"):
                assert isinstance(copy.part.body, Plate)
                c, s = math.cos(angle), math.sin(angle)
                at = polygon(copy.part.body, 1e-4) @ np.array([[c, s], [-s, c]]) + (x, y)
                areas[copy.part.key] = shapely.Polygon(at)
        return float(shapely.distance(areas["stop"], areas["swing_link"]))

    assert apart(contact.link_angle) == pytest.approx(0.0, abs=2e-3)
    assert apart(contact.link_angle + 0.002) == 0.0
    for before in np.linspace(math.pi, contact.link_angle - 0.002, 50):
        assert apart(float(before)) > 0.01


@machines
@styles
def test_the_mirror_image_is_met_alike(make: Make, style: Style) -> None:
    one, other = found(*make("ccw", style)), found(*make("cw", style))
    assert other.link_angle == pytest.approx(one.link_angle, abs=1e-12)
    assert other.place == pytest.approx(one.place, abs=1e-9)
    assert other.reach == pytest.approx(one.reach, abs=1e-9)
    assert other.on_edge == one.on_edge
