"""Every free body in balance, over random designs: forces and moments of each part add up to nothing."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from loads.cycle import cycle
from loads.far_ends.chain import BEHAVIOUR as CHAIN
from loads.linkage import Linkage
from loads.members import History, history, load_rows, members, site_histories
from loads.records import CASES, FIRST_HALF, HOLD, SECOND_HALF, SiteHistory
from parts.design import Floats, Targets
from parts.stack import Side, Stack
from tests.loads.machines import TABLE, machines, run_of

SHOCK, SHARE = 1.25, 0.6


def stack_of(twin: bool) -> Stack:
    back, front = Side("back", -1), Side("front", 1)
    return Stack(
        sides=(back, front) if twin else (back,), load_share=SHARE if twin else 1.0,
        chain_pin_support="double shear" if twin else "cantilever", crank_pin_headed=not twin,
        chain_plane_width=39.0, plate_gap=1.0, link_thickness=12.0, disc_thickness=20.0,
    )  # fmt: skip


TARGETS = Targets(shock_factor=SHOCK, load_share=SHARE, chain=5.0, ultimate=2.4, yield_=2.0)
Sites = dict[tuple[str, str], SiteHistory]


def solved(m: Linkage, twin: bool) -> tuple[History, Stack, Sites]:
    past = history(m, cycle(m))
    stack = stack_of(twin)
    return past, stack, {(s.part, s.site): s for s in site_histories(past, stack, TARGETS, 40.0, CHAIN.sites)}


def cross(at: tuple[Floats | float, Floats | float, Floats | float], force: Floats) -> Floats:
    x, y, z = at
    return np.stack([y * force[2] - z * force[1], z * force[0] - x * force[2], x * force[1] - y * force[0]])


def balanced(total: Floats, scale: float) -> None:
    assert np.abs(total).max() <= 1e-8 * scale + 1e-9


@settings(max_examples=40, deadline=None)
@given(machines(), st.booleans())
def test_the_link_is_in_balance(m: Linkage, twin: bool) -> None:
    _, _, at = solved(m, twin)
    pin, chain, stop = (at["swing_link", s] for s in ("crank_pin_eye", "chain_pin_eye", "stop_flank"))
    scale = float(np.abs(pin.force).max())
    balanced(pin.force + chain.force + stop.force, scale)
    length, reach = float(m.link_length), float(m.stop_reach)
    moment = pin.moment + chain.moment + stop.moment
    moment = moment + cross((length, 0.0, 0.0), chain.force) + cross((reach, 0.0, 0.0), stop.force)
    balanced(moment, scale * length)


@settings(max_examples=40, deadline=None)
@given(machines(), st.booleans())
def test_the_stop_pushes_in_the_direction_of_rotation(m: Linkage, twin: bool) -> None:
    """n is +y of the link frame in a ccw machine, −y in a cw one, and the stop never pulls."""
    _, _, at = solved(m, twin)
    force = at["swing_link", "stop_flank"].force
    size = float(np.abs(force).max())
    assert np.abs(force[0]).max() <= 1e-9 * size + 1e-12
    assert (force[1] * float(m.turn)).min() >= -1e-9 * size


@settings(max_examples=40, deadline=None)
@given(machines(), st.booleans())
def test_the_disc_is_in_balance(m: Linkage, twin: bool) -> None:
    """With the drive's torque at the hub, about the middle of its back: crank pin, stop and hub."""
    past, stack, at = solved(m, twin)
    pin, stop, hub = (at["crank_disc", s] for s in ("crank_pin_hole", "stop_seat", "hub_face"))
    scale = float(np.abs(pin.force).max())
    balanced(pin.force + stop.force + hub.force, scale)
    # the contact on the link's axis has the same line of action as on its flank: the push is across the link
    r, reach, turn = float(m.crank_radius), float(m.stop_reach), float(m.turn)
    beta = float(m.seat_angle)
    contact = (r - reach * np.cos(beta), -turn * reach * np.sin(beta))
    depth = stack.disc_back - stack.disc_middle
    moment = pin.moment + stop.moment + hub.moment
    moment = moment + cross((r, 0.0, depth), pin.force) + cross((*contact, depth), stop.force)
    balanced(moment, scale * (r + 60.0))
    torque = past.state.torque * SHOCK * stack.load_share * turn
    balanced(hub.moment[2] - torque, scale * r)


@settings(max_examples=40, deadline=None)
@given(machines(), st.booleans())
def test_pins_and_stop_are_in_balance(m: Linkage, twin: bool) -> None:
    _, stack, at = solved(m, twin)
    depth = stack.disc_middle - stack.link_middle
    for part, near, root in (("crank_pin", "journal", "root"), ("stop", "contact", "root")):
        load, hold = at[part, near], at[part, root]
        scale = float(np.abs(load.force).max())
        balanced(load.force + hold.force, scale)
        balanced(load.moment + hold.moment + cross((0.0, 0.0, depth), load.force), scale * depth)
    chain, seat = at["chain_pin", "journal"], at["chain_pin", "link_seat"]
    balanced(chain.force * stack.load_share + seat.force, float(np.abs(chain.force).max()))
    balanced(
        seat.moment + cross((0.0, 0.0, stack.chain_offset), chain.force),
        float(np.abs(chain.force).max()) * max(stack.chain_offset, 1.0),
    )


@settings(max_examples=40, deadline=None)
@given(machines(friction=True), st.booleans())
def test_the_frame_takes_nothing_but_couples_that_cancel(m: Linkage, twin: bool) -> None:
    """Bearing, sheave and anchor pull the frame with no resultant; with the drive's reaction there is no moment left.

    Only the torque that friction takes is over: it passes between shaft and bearing inside the frame.
    """
    past, _, at = solved(m, twin)
    bearing, sheave, anchor, drive = (at["frame", s] for s in ("main_bearing", "sheave", "spring_anchor", "drive"))
    scale = float(np.abs(bearing.force).max())
    balanced(bearing.force + sheave.force + anchor.force, scale)
    run = run_of(m)
    phi, t0, radius = float(m.start_direction * m.turn), float(run.distance), float(run.pitch_radius)
    w, turn = float(run.wrap_side), float(m.turn)
    cx, cy = t0 * np.cos(phi) + w * radius * np.sin(phi), t0 * np.sin(phi) - w * radius * np.cos(phi)
    # the chain leaves the sheave at a quarter turn from its direction there, on the outer side
    out = -w * float(run.start_wrap) + phi
    ex, ey = np.cos(out), np.sin(out)
    leave = (cx - w * radius * ey, turn * (cy + w * radius * ex), 0.0)
    moment = cross((cx, turn * cy, 0.0), sheave.force) + sheave.moment + cross(leave, anchor.force) + drive.moment
    moment = moment + np.stack([0 * drive.force[0], 0 * drive.force[0], past.state.friction_torque * SHOCK * turn])
    balanced(moment, scale * (t0 + radius))


@pytest.mark.parametrize("twin", [True, False])
def test_rows_are_at_the_worst_angle_of_their_case(twin: bool) -> None:
    m = TABLE["near"]
    past, stack, at = solved(m, twin)
    rows = load_rows(past, tuple(at.values()))
    assert len(rows) == len(at) * len(CASES)
    share = stack.load_share * SHOCK
    stop = next(r for r in rows if r.part == "stop" and r.site == "contact" and r.case == SECOND_HALF)
    assert stop.magnitude == pytest.approx(31193.9 * share, rel=1e-5)
    pin = next(r for r in rows if r.part == "crank_pin" and r.site == "journal" and r.case == SECOND_HALF)
    assert pin.magnitude == pytest.approx(30387.2 * share, rel=1e-5)
    chain = next(r for r in rows if r.part == "chain" and r.case == SECOND_HALF)
    assert chain.magnitude == pytest.approx(30397.1 * SHOCK, rel=1e-5)
    hold = next(r for r in rows if r.part == "chain" and r.case == HOLD)
    assert np.degrees(hold.crank_angle) == pytest.approx(354.34 - 4.0, abs=0.01)
    idle = next(r for r in rows if r.part == "stop" and r.site == "contact" and r.case == FIRST_HALF)
    assert idle.magnitude == pytest.approx(0.0, abs=1e-6)


def test_the_offset_couple_is_the_chain_times_its_distance() -> None:
    """Single stack: half link, gap and half the chain's width, carried to the crank pin and through the disc."""
    past, stack, at = solved(TABLE["near"], False)
    f = members(past, stack, TARGETS)
    lever = 12.0 / 2 + 39.0 / 2
    assert stack.chain_offset == pytest.approx(lever)
    assert np.linalg.norm(at["swing_link", "chain_pin_eye"].moment, axis=0) == pytest.approx(
        np.linalg.norm(f.chain_side, axis=0) * lever
    )
    free = past.rows(FIRST_HALF)
    to_disc = lever + 12.0 / 2 + 1.0 + 20.0 / 2
    root = np.linalg.norm(at["crank_pin", "root"].moment, axis=0)[free]
    assert root == pytest.approx(np.linalg.norm(f.chain_side, axis=0)[free] * to_disc)
    tilt = np.linalg.norm(at["crank_disc", "hub_face"].moment[:2], axis=0)
    assert tilt == pytest.approx(np.linalg.norm(f.chain_side, axis=0) * (to_disc + 20.0 / 2))


def test_the_twin_tilts_its_discs_through_the_stub_pins() -> None:
    past, stack, at = solved(TABLE["near"], True)
    f = members(past, stack, TARGETS)
    tilt = np.linalg.norm(at["crank_disc", "hub_face"].moment[:2], axis=0)
    assert tilt == pytest.approx(np.linalg.norm(f.chain_side, axis=0) * (12.0 / 2 + 1.0 + 20.0))
