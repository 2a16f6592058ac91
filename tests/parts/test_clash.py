"""The clash sweep: quiet about a machine that is right, and precise about one that is not."""

from __future__ import annotations

import subprocess
import sys
from dataclasses import replace
from typing import Any

import numpy as np
import pytest
import shapely
from hypothesis import given, settings
from hypothesis import strategies as st

from parts.assembly import Frame
from parts.clash import Findings, sweep
from parts.design import Design
from parts.layers import Geometry, Round, Shape, Strip, machine_layers, part_layers
from parts.meeting import gaps
from parts.outline import Part, Plate
from parts.registry import make_parts
from parts.shape import cut_area, volume
from parts.sizes import Sizes
from tests.parts.designs import sheave_of
from tests.parts.machines import Make, Rotation, Style, large, small, stack_of, sweep_poses

machines = pytest.mark.parametrize("make", [large, small])
both_ways = pytest.mark.parametrize("rotation", ["ccw", "cw"])
styles = pytest.mark.parametrize("style", ["post", "block"])


def look(design: Design, sizes: Sizes, parts: tuple[Part, ...] | None = None, step: float = 3.0) -> Findings:
    stack = stack_of(design, sizes)
    made = make_parts(design, sizes, stack) if parts is None else parts
    return sweep(made, design, sizes, stack, sweep_poses(design, np.radians(step)))


def moved_stop(design: Design, sizes: Sizes, dx: float, dy: float) -> tuple[Part, ...]:
    """The machine's parts with the stop in another place on the disc than the mechanism has it."""

    def shifted(part: Part) -> Part:
        places = tuple(replace(p, at=(p.at[0] + dx, p.at[1] + dy, p.at[2])) for p in part.placements)
        return replace(part, placements=places)

    parts = make_parts(design, sizes, stack_of(design, sizes))
    return tuple(shifted(p) if p.key == "stop" else p for p in parts)


@machines
@both_ways
@styles
def test_a_good_machine_is_clear(make: Make, rotation: Rotation, style: Style) -> None:
    found = look(*make(rotation, style))
    assert found.clear, [str(f) for f in (*found.clashes, *found.intrusions)]
    contact = next(c for c in found.contacts if {c.part_a, c.part_b} == {"stop", "swing_link"})
    assert contact.clearance == pytest.approx(0.0, abs=1e-6)
    assert all(c.clearance > 0 for c in found.clearances)


@machines
@styles
def test_mirrored_machines_are_alike(make: Make, style: Style) -> None:
    one, other = look(*make("ccw", style)), look(*make("cw", style))
    assert [(c.part_a, c.part_b) for c in one.clearances] == [(c.part_a, c.part_b) for c in other.clearances]
    for a, b in zip(one.clearances, other.clearances, strict=True):
        assert b.clearance == pytest.approx(a.clearance, abs=1e-6)


@machines
@both_ways
@styles
def test_a_stop_that_is_too_high_meets_the_chains_end(make: Make, rotation: Rotation, style: Style) -> None:
    design, sizes = make(rotation, style)
    stack = stack_of(design, sizes)
    high = replace(sizes, stop=replace(sizes.stop, height=sizes.stop.height + stack.chain_plane_width / 2))
    found = look(design, high)
    assert not found.clear
    intruder = found.intrusions[0]
    assert intruder.part == "stop"
    assert intruder.depth == pytest.approx(stack.chain_plane_width / 2)
    assert intruder.meets in ("chain", "chain_end", "chain_pin")
    assert intruder.crank_angle is not None
    assert 0.0 <= intruder.crank_angle < 2 * np.pi
    assert any(c.part_b == "stop" and c.part_a in ("chain", "chain_end") for c in found.clashes)
    assert "chain's plane" in str(intruder)


def test_a_stop_that_is_just_too_high_only_stands_in_the_plane() -> None:
    design, sizes = large()
    found = look(design, replace(sizes, stop=replace(sizes.stop, height=sizes.stop.height + 0.5)))
    assert found.clashes == ()
    assert [(i.part, i.meets) for i in found.intrusions] == [("stop", None)]
    assert found.intrusions[0].depth == pytest.approx(0.5)


@both_ways
def test_a_chain_end_that_reaches_the_sheave_is_reported(rotation: Rotation) -> None:
    design, sizes = large(rotation)
    start = float(sweep_poses(design).free_length[0])
    long = replace(sizes, chain_end=replace(sizes.chain_end, length=start))
    found = look(design, long)
    clash = next(c for c in found.clashes if {c.part_a, c.part_b} == {"chain_end", "sheave"})
    assert clash.sweep == "winding"
    assert clash.crank_angle == pytest.approx(0.0)
    # it meets the sheave's rim, near where the chain does
    cx, cy = sheave_of(design).center
    rim = sheave_of(design).pitch_radius + design.far_end.height / 2
    assert np.hypot(clash.x - cx, clash.y - cy) == pytest.approx(rim, abs=sizes.chain_end.height)
    assert "chain_end and sheave" in str(clash)


@both_ways
@styles
def test_a_stop_nearer_the_link_is_met_before_the_catch(rotation: Rotation, style: Style) -> None:
    design, sizes = large(rotation, style)
    sign = -1.0 if rotation == "ccw" else 1.0  # towards the seated link
    found = look(design, sizes, moved_stop(design, sizes, 0.0, 2.0 * sign), step=1.0)
    clash = next(c for c in found.clashes if {c.part_a, c.part_b} == {"stop", "swing_link"})
    catch = np.radians(177.0)
    assert clash.sweep == "winding"
    assert catch - np.radians(6.0) < clash.crank_angle < catch + np.radians(2.0)
    assert clash.depth == pytest.approx(2.0, abs=0.05)
    assert clash.deepest_at >= clash.crank_angle


def test_a_stop_that_the_link_never_reaches_shows_in_the_contacts() -> None:
    design, sizes = large()
    found = look(design, sizes, moved_stop(design, sizes, 0.0, 1.5))
    assert found.clear
    contact = next(c for c in found.contacts if {c.part_a, c.part_b} == {"stop", "swing_link"})
    assert contact.clearance == pytest.approx(1.5, abs=0.01)


def test_a_post_at_the_wrong_reach_meets_the_crank_pins_ring() -> None:
    design, sizes = large()
    place = make_parts(design, sizes, stack_of(design, sizes))[3]
    assert place.key == "stop"
    x, y, _ = place.placements[0].at
    found = look(design, sizes, moved_stop(design, sizes, design.mechanism.crank_radius - x, 25.0 - y))
    pairs = {frozenset((c.part_a, c.part_b)) for c in found.clashes}
    assert frozenset(("stop", "crank_spacer")) in pairs
    assert frozenset(("stop", "swing_link")) in pairs


def test_a_chain_end_that_is_too_short_brings_the_chain_on_the_pin() -> None:
    design, sizes = large()
    short = replace(sizes, chain_end=replace(sizes.chain_end, length=20.0))
    pairs = {frozenset((c.part_a, c.part_b)) for c in look(design, short).clashes}
    assert frozenset(("chain", "chain_pin")) in pairs


def test_the_swing_is_looked_at_by_itself() -> None:
    design, sizes = large()
    stack, poses = stack_of(design, sizes), sweep_poses(design)
    swing = np.flatnonzero(~poses.taut)
    only = replace(
        poses,
        **{name: getattr(poses, name)[swing] for name in poses.__dataclass_fields__},
    )
    parts = make_parts(design, sizes, stack)
    found = sweep(parts, design, sizes, stack, only)
    assert found.clear
    assert {c.sweep for c in found.clearances} == {"release"}
    assert all("chain" not in (c.part_a, c.part_b) for c in found.clearances)
    # something on the disc where only the swinging link comes: a second stop beyond the first would be in its way
    x, y, _ = parts[3].placements[0].at
    blocked = sweep(moved_stop(design, sizes, 90.0 - x, -30.0 - y), design, sizes, stack, only)
    assert any(c.sweep == "release" for c in blocked.clashes)


@machines
@styles
def test_layers_have_the_parts_volume(make: Make, style: Style) -> None:
    design, sizes = make("ccw", style)
    for part in make_parts(design, sizes, stack_of(design, sizes)):
        layers = part_layers(part)
        filled = sum(
            (layer.geometry.area.area if isinstance(layer.geometry, Shape) else np.pi * layer.geometry.radius**2)
            * (layer.z_high - layer.z_low)
            for layer in layers
            if not isinstance(layer.geometry, Strip)
        )
        bore = getattr(part.body, "bore", 0.0)
        if bore:  # a ring counts as full: its pin is in it
            continue
        assert filled == pytest.approx(part.quantity * volume(part), rel=0.02), part.name
        if isinstance(part.body, Plate) and not part.body.counterbores and not part.body.slots:
            area = layers[0].geometry
            assert isinstance(area, Shape)
            assert area.area.area >= cut_area(part.body)


def test_copies_share_their_geometry() -> None:
    design, sizes = large()
    layers = [
        x
        for x in machine_layers(make_parts(design, sizes, stack_of(design, sizes)), design, sizes)
        if x.key == "swing_link"
    ]
    assert len(layers) == 2
    assert layers[0].geometry is layers[1].geometry


def carried(area: Any, dx: float, dy: float, turn: float) -> Any:
    c, s = np.cos(turn), np.sin(turn)
    return shapely.transform(area, lambda at: at @ np.array([[c, s], [-s, c]]) + (dx, dy))


coordinate = st.floats(-30.0, 30.0)


@given(
    dx=st.lists(coordinate, min_size=6, max_size=6),
    dy=st.lists(coordinate, min_size=6, max_size=6),
    turn=st.lists(st.floats(-4.0, 4.0), min_size=6, max_size=6),
)
@settings(max_examples=60, deadline=None)
def test_gaps_are_the_distances_of_the_shapes(dx: list[float], dy: list[float], turn: list[float]) -> None:
    frame = Frame(np.array(dx), np.array(dy), np.array(turn))
    chain_to = np.full(6, 12.0)
    plate = shapely.difference(shapely.box(-8.0, -3.0, 8.0, 3.0), shapely.Point(4.0, 0.0).buffer(1.5))
    shapes: list[Geometry] = [
        Shape(plate),
        Shape(shapely.box(-2.0, -2.0, 5.0, 1.0)),
        Round(1.0, -1.0, 2.5),
        Strip(-4.0, 1.5),
    ]
    areas = [
        plate,
        shapely.box(-2.0, -2.0, 5.0, 1.0),
        shapely.Point(1.0, -1.0).buffer(2.5, 256),
        shapely.box(-4.0, -1.5, 12.0, 1.5),
    ]
    for a, area in zip(shapes, areas, strict=True):
        for b, other in zip(shapes, areas, strict=True):
            if isinstance(a, Strip) and isinstance(b, Strip):
                continue
            found = gaps(a, b, frame, chain_to)
            exact = [shapely.distance(area, carried(other, dx[i], dy[i], turn[i])) for i in range(6)]
            assert np.all(np.maximum(found, 0.0) <= np.array(exact) + 1e-3)
            assert max(found.min(), 0.0) == pytest.approx(min(exact), abs=1e-3)


def test_a_flat_overlap_is_as_deep_as_it_is_thick() -> None:
    a, b = Shape(shapely.box(0.0, 0.0, 40.0, 10.0)), Shape(shapely.box(0.0, 0.0, 20.0, 5.0))
    down = np.array([9.75, 9.0, 10.0, 10.5])
    frame = Frame(np.full(4, 10.0), down, np.zeros(4))
    assert gaps(a, b, frame, np.zeros(4)) == pytest.approx([-0.25, -1.0, 0.0, 0.5], abs=1e-6)


def test_importing_the_sweep_does_not_import_shapely() -> None:
    code = "import parts.clash, parts.registry, sys; sys.exit(any(m in sys.modules for m in ('shapely', 'cadquery')))"
    assert subprocess.run([sys.executable, "-c", code], check=False).returncode == 0
