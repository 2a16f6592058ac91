"""Covers of coarse motions: they hold every pose between the steps, and are no larger than they say."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
import shapely
from hypothesis import given, settings
from hypothesis import strategies as st

from parts.assembly import pose
from parts.design import Design
from parts.layers import machine_layers
from parts.registry import make_parts
from parts.sizes import Sizes
from parts.sweeps import Body, Cover, Motion, Target, approach, bodies, covers, outline_of
from tests.parts.machines import Make, Rotation, large, small, stack_of

FINE = 24  # poses in a cell that are looked at


def made(design: Design, sizes: Sizes) -> dict[str, Body]:
    parts = make_parts(design, sizes, stack_of(design, sizes))
    return {body.part: body for body in bodies(machine_layers(parts, design, sizes))}


def motion(disc: np.ndarray, link: np.ndarray, chain: float = 0.2, swing: float = 0.0) -> Motion:
    """``disc`` (n), ``link`` (n, k)."""
    full = np.zeros_like(link)
    return Motion(disc, disc[:, None] + full, link, chain + full, 200.0 + full, swing + full)


def filled(cover: Cover) -> Any:
    return shapely.union_all(shapely.buffer(cover.cores, cover.radius, quad_segs=64))


def placed(body: Body, design: Design, disc: float, link: float, chain: float) -> Any:
    """A body in one pose, from its core."""
    frame = pose(design, disc, link, chain).of(body.mover)
    c, s = np.cos(float(frame.rotation)), np.sin(float(frame.rotation))
    at = body.core @ np.array([[c, s], [-s, c]]) + (float(frame.x), float(frame.y))
    return shapely.buffer(shapely.convex_hull(shapely.MultiPoint(at)), body.radius, quad_segs=32)


@settings(max_examples=30, deadline=None)
@given(step=st.floats(0.05, 0.7), turn=st.floats(-1.0, 1.0), part=st.sampled_from(["swing_link", "chain_end"]))
def test_every_pose_between_coarse_steps_is_in_the_cover(step: float, turn: float, part: str) -> None:
    """Cells of up to 80°: the hull alone lacks millimetres there, the grown radius does not."""
    design, sizes = large()
    body = made(design, sizes)[part]
    share = np.linspace(0.0, 1.0, 5)
    disc, link = 2.0 * step * share, 0.5 + 2.0 * turn * step * share
    found = covers(body, motion(disc, link[:, None]), design)
    area = filled(found)
    poses = []
    for t in np.linspace(0.0, 1.0, 2 * FINE + 1):
        one = placed(body, design, 2.0 * step * t, 0.5 + 2.0 * turn * step * t, 0.2)
        poses.append(one)
        assert shapely.covers(shapely.buffer(area, 2e-3), one), t
    dense = shapely.union_all(poses)
    assert shapely.covers(shapely.buffer(dense, float(found.excess.max()) + 0.05), area)


@settings(max_examples=20, deadline=None)
@given(step=st.floats(0.02, 0.3), width=st.floats(0.1, 0.8), seed=st.integers(0, 1000))
def test_every_pose_of_a_free_link_is_in_the_cover(step: float, width: float, seed: int) -> None:
    design, sizes = small()
    body, rng = made(design, sizes)["swing_link"], np.random.default_rng(seed)
    disc = np.linspace(0.0, 2.0 * step, 5)
    link = disc[:, None] + 3.0 + width * np.linspace(-1.0, 1.0, 5) * (1.0 + disc[:, None])
    area = shapely.buffer(filled(covers(body, motion(disc, link), design)), 2e-3)
    for _ in range(40):
        t, f = rng.uniform(0.0, 2.0 * step), rng.uniform(-1.0, 1.0)
        assert shapely.covers(area, placed(body, design, t, t + 3.0 + width * f * (1.0 + t), 0.2))


@pytest.mark.parametrize("swing", [0.3, 1.4, 2.6, np.pi])
def test_a_loose_end_is_covered_in_every_direction_and_no_further(swing: float) -> None:
    design, sizes = large()
    body = made(design, sizes)["chain_end"]
    disc, link = np.linspace(0.0, 0.02, 3), np.full((3, 1), 0.4)
    found = covers(body, motion(disc, link, 0.2, swing), design)
    poses = [placed(body, design, 0.01, 0.4, 0.2 + g) for g in np.linspace(-swing, swing, 181)]
    area = shapely.buffer(filled(found), 2e-3)
    assert all(shapely.covers(area, one) for one in poses)
    dense = shapely.union_all(poses)
    assert shapely.covers(shapely.buffer(dense, float(found.excess.max()) + 0.6), filled(found))


@pytest.mark.parametrize("make", [large, small])
@pytest.mark.parametrize("rotation", ["ccw", "cw"])
def test_a_link_is_its_axis_with_half_its_width_round_it(make: Make, rotation: Rotation) -> None:
    design, sizes = make(rotation)
    found = made(design, sizes)
    link = found["swing_link"]
    assert link.radius == pytest.approx(sizes.link.width / 2.0, abs=0.05)
    assert np.ptp(link.core[:, 0]) == pytest.approx(design.mechanism.link_length, abs=0.1)
    assert np.ptp(link.core[:, 1]) < 0.1
    end = found["chain_end"]
    assert end.radius == pytest.approx(sizes.chain_end.height / 2.0, abs=0.05)
    assert np.ptp(end.core[:, 0]) == pytest.approx(sizes.chain_end.length, abs=0.1)


def test_what_lies_within_another_part_of_the_same_mover_is_left_out() -> None:
    design, sizes = large()
    found = made(design, sizes)
    assert {"crank_disc", "swing_link", "chain_end", "chain", "sheave"} <= set(found)
    assert "crank_pin" not in found
    assert "stop" not in found
    disc = found["crank_disc"]
    assert disc.mover == "machine"
    assert disc.radius == pytest.approx(sizes.disc.outer_diameter / 2.0, abs=0.05)


def test_a_chain_pin_that_stands_out_of_the_link_is_kept() -> None:
    from dataclasses import replace

    design, sizes = large()
    thick = replace(sizes, chain_pin=replace(sizes.chain_pin, middle_diameter=60.0))
    assert "chain_pin" in made(design, thick)
    assert "chain_pin" not in made(design, sizes)


def test_distances_to_walls_and_areas() -> None:
    """A disc of 95 mm about the axis against a wall at 120, one at 90, and a square."""
    design, sizes = large()
    disc = made(design, sizes)["crank_disc"]
    some = [covers(disc, motion(np.zeros(3), np.zeros((3, 1))), design)]
    near = approach(some, Target("wall", axis=1, side=-1, at=-120.0), design)
    assert near.clearance == pytest.approx(25.0, abs=0.05)
    assert (near.x, near.y) == pytest.approx((0.0, -95.0), abs=0.05)
    deep = approach(some, Target("wall", axis=0, side=1, at=90.0), design)
    assert deep.clearance == pytest.approx(-5.0, abs=0.05)
    square = approach(some, Target("square", shapely.box(100.0, -5.0, 110.0, 5.0)), design)
    assert square.clearance == pytest.approx(5.0, abs=0.05)
    assert (square.x, square.y) == pytest.approx((95.0, 0.0), abs=5.5)
    assert np.hypot(square.x, square.y) == pytest.approx(95.0, abs=0.05)


@settings(max_examples=15, deadline=None)
@given(step=st.floats(0.05, 0.4), smooth=st.floats(0.02, 0.5))
def test_an_outline_holds_its_covers_and_little_more(step: float, smooth: float) -> None:
    design, sizes = small()
    body = made(design, sizes)["swing_link"]
    disc = np.linspace(0.0, 4.0 * step, 9)
    found = covers(body, motion(disc, 1.0 + disc[:, None]), design)
    whole = outline_of([found], smooth)
    assert shapely.covers(whole, filled(found))
    assert shapely.covers(shapely.buffer(filled(found), 2.0 * smooth + 0.05), whole)
