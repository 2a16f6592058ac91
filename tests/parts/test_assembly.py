"""Copies of parts in a given position of the machine."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from parts.assembly import matrix, placed, pose
from parts.registry import make_parts
from tests.parts.designs import sheave_of
from tests.parts.machines import Rotation, large, small, stack_of, sweep_poses

angles = st.floats(-7.0, 7.0)


@given(disc=angles, link=angles, chain=angles)
def test_pins_go_with_the_disc_and_the_link(disc: float, link: float, chain: float) -> None:
    design, sizes = large()
    r, length = design.mechanism.crank_radius, design.mechanism.link_length
    copies = {
        c.name: c.at
        for c in placed(make_parts(design, sizes, stack_of(design, sizes)), pose(design, disc, link, chain))
    }
    a = np.array([r * np.cos(disc), r * np.sin(disc)])
    b = a + length * np.array([np.cos(link), np.sin(link)])
    assert copies["crank_pin_1"][:2] == pytest.approx(a)
    assert copies["crank_pin_2"][:2] == pytest.approx(a)
    assert copies["swing_link_1"][:2] == pytest.approx(a)
    assert copies["swing_link_1"][3] == pytest.approx(link)
    assert copies["chain_pin"][:2] == pytest.approx(b)
    assert copies["chain_end"][:2] == pytest.approx(b)
    assert copies["chain_end"][3] == pytest.approx(chain)
    assert copies["crank_disc_back"][:2] == pytest.approx((0.0, 0.0))


def test_every_copy_has_a_name_of_its_own() -> None:
    for make, expected in (
        (large, {"crank_disc_back", "crank_disc_front", "swing_link_2", "crank_pin_2", "stop_1", "chain_end"}),
        (small, {"crank_disc", "swing_link", "crank_pin", "stop", "chain_pin", "chain_end"}),
    ):
        design, sizes = make()
        parts = make_parts(design, sizes, stack_of(design, sizes))
        names = [c.name for c in placed(parts, pose(design, 0.0, 0.0, 0.0))]
        assert len(names) == len(set(names)) == sum(p.quantity for p in parts)
        assert expected <= set(names)


def test_many_poses_at_once_are_the_single_ones() -> None:
    design, _ = large("cw")
    poses = sweep_poses(design, np.radians(20.0))
    many = pose(design, poses.disc_angle, poses.link_angle, poses.chain_angle)
    for i in range(len(poses.crank_angle)):
        one = pose(design, poses.disc_angle[i], poses.link_angle[i], poses.chain_angle[i])
        for mover in ("disc", "link", "chain_end", "machine"):
            assert [float(v[i]) for v in many.of(mover)] == pytest.approx([float(v) for v in one.of(mover)])


def test_the_chain_ends_at_the_sheave_in_every_pose() -> None:
    ways: tuple[Rotation, ...] = ("ccw", "cw")
    for make in (large, small):
        for rotation in ways:
            design, _ = make(rotation)
            poses = sweep_poses(design, np.radians(5.0))
            at = pose(design, poses.disc_angle, poses.link_angle, poses.chain_angle).chain_end
            x = at.x + poses.free_length * np.cos(at.rotation)
            y = at.y + poses.free_length * np.sin(at.rotation)
            cx, cy = sheave_of(design).center
            assert np.hypot(x - cx, y - cy) == pytest.approx(np.full_like(x, sheave_of(design).pitch_radius))


def test_a_matrix_carries_the_parts_frame() -> None:
    m = matrix((1.0, 2.0, 3.0, np.pi / 2))
    assert m @ [1.0, 0.0, 0.0, 1.0] == pytest.approx([1.0, 3.0, 3.0, 1.0])
    assert m[3] == pytest.approx([0.0, 0.0, 0.0, 1.0])
