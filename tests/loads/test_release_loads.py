"""The moments of a release as rows of the history: free bodies in balance, peaks kept, shock factor left out."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import HealthCheck, assume, given, settings
from hypothesis import strategies as st

import loads.release.simulate as simulate_
from loads.cycle import cycle
from loads.far_ends.chain import BEHAVIOUR as CHAIN
from loads.linkage import Linkage
from loads.members import History, history, load_rows, members, site_histories
from loads.records import CASES, RELEASE, SNATCH
from loads.release.rows import moments_of, release_state
from loads.release.scene import Scene
from loads.release.simulate import Course, simulate
from parts.design import Floats
from parts.stack import Stack
from tests.loads.release_scenes import released
from tests.loads.test_members import TARGETS, Sites, balanced, cross, stack_of

FEW = settings(max_examples=6, deadline=None, suppress_health_check=[HealthCheck.too_slow])


def run(k: Scene) -> Course:
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(simulate_, "LONGEST", 0.05)
        course = simulate(k)
    assume(course.slack_first is not None or course.straight is not None)
    return course


def turn_of(course: Course) -> float:
    """When the swing ends: the first slack, or the straight link."""
    return min(t for t in (course.slack_first, course.straight) if t is not None)


def with_course(m: Linkage, course: Course) -> History:
    rows, late = moments_of(course)
    return replace(history(m, cycle(m)), release=release_state(m, course, rows), snatches=late)


def solved(m: Linkage, k: Scene, twin: bool) -> tuple[History, Stack, Sites, Course]:
    course = run(k)
    past, stack = with_course(m, course), stack_of(twin)
    at = {(s.part, s.site): s for s in site_histories(past, stack, TARGETS, 40.0, CHAIN.sites)}
    return past, stack, at, course


def beyond(past: History) -> slice:
    """The rows of the release."""
    return slice(past.winding.crank_angle.size, None)


Pair = tuple[Linkage, Scene]


@FEW
@given(released(), st.booleans())
def test_the_link_is_moved_by_pin_chain_and_stop(pair: Pair, twin: bool) -> None:
    """Force is mass times acceleration of its middle; with what its inertia takes at the stop's reach, moments about the
    crank pin add up to nothing."""
    m, k = pair
    past, stack, at, course = solved(m, k, twin)
    rows, _ = moments_of(course)
    b, share = beyond(past), stack.load_share
    f = members(past, stack, TARGETS)
    psi, theta, w = course.psi[rows], course.theta[rows], k.speed
    turn, spin = course.forces["psi_turn"][rows], course.psi_rate[rows]
    e = np.stack([np.cos(psi), np.sin(psi)])
    n = np.stack([-np.sin(psi), np.cos(psi)])
    middle = -k.link_mass * w**2 * k.crank_radius * np.stack([np.cos(theta), np.sin(theta)])
    middle = middle + k.first_moment * (turn * n - spin**2 * e)
    total = (f.pin_on_link + f.chain_side + f.stop_on_link)[:2, b]
    size = float(np.abs(f.pin_on_link).max())
    assert total / share == pytest.approx(middle, abs=1e-7 * size / share)
    # in the part's own frame, moments about the crank pin
    chain, stop = at["swing_link", "chain_pin_eye"], at["swing_link", "stop_flank"]
    inertia = f.inertia_on_link
    assert np.all(inertia[:, : b.start] == 0.0)
    across = (inertia[0] * -np.sin(past.state.link_direction) + inertia[1] * np.cos(past.state.link_direction))[b]
    moment = float(m.link_length) * chain.force[1, b] * float(m.turn)
    moment = moment + float(m.stop_reach) * (stop.force[1, b] * float(m.turn) + across)
    balanced(moment, size * float(m.link_length))
    # and along the link all of them together
    along = np.stack([np.cos(past.state.link_direction), np.sin(past.state.link_direction), 0.0 * f.torque])
    total = (f.chain_side + f.stop_on_link + f.pin_on_link + inertia)[:, b]
    scale = float(np.abs(f.pin_on_link[:, b]).max())
    assert np.allclose((total * along[:, b]).sum(axis=0), 0.0, atol=1e-9 * scale)
    assert not np.any(inertia[:, : past.winding.crank_angle.size])


@FEW
@given(released(friction=False), st.booleans())
def test_the_disc_is_in_balance(pair: Pair, twin: bool) -> None:
    """Crank pin, stop and hub with the drive's torque, about the middle of the disc's back: the disc turns evenly."""
    m, k = pair
    past, stack, at, course = solved(m, replace(k, pin_friction=0.0, chain_pin_friction=0.0), twin)
    b = beyond(past)
    pin, stop, hub = (at["crank_disc", s] for s in ("crank_pin_hole", "stop_seat", "hub_face"))
    scale = float(np.abs(pin.force).max())
    balanced(pin.force + stop.force + hub.force, scale)
    r, reach, turn = float(m.crank_radius), float(m.stop_reach), float(m.turn)
    # the stop pushes across the link wherever that is: front or back
    angle = (past.state.link_direction - past.state.crank_angle)[b]
    contact = (r + reach * np.cos(angle), turn * reach * np.sin(angle), np.zeros_like(angle))
    depth = stack.disc_back - stack.disc_middle
    moment = (pin.moment + stop.moment + hub.moment)[:, b]
    moment = moment + cross((r, 0.0, depth), pin.force[:, b])
    moment = moment + cross((contact[0], contact[1], depth), stop.force[:, b])
    balanced(moment, scale * (r + reach + 60.0))
    rows, _ = moments_of(course)
    balanced(hub.moment[2, b] - course.forces["torque"][rows] * stack.load_share * turn, scale * r)


@FEW
@given(released(), st.booleans())
def test_pins_and_frame_are_in_balance(pair: Pair, twin: bool) -> None:
    m, k = pair
    _, stack, at, _ = solved(m, k, twin)
    depth = stack.disc_middle - stack.link_middle
    for part, near, root in (("crank_pin", "journal", "root"), ("stop", "contact", "root")):
        load, hold = at[part, near], at[part, root]
        scale = float(np.abs(load.force).max())
        balanced(load.force + hold.force, scale)
        balanced(load.moment + hold.moment + cross((0.0, 0.0, depth), load.force), scale * depth)
    chain, seat = at["chain_pin", "journal"], at["chain_pin", "link_seat"]
    balanced(chain.force * stack.load_share + seat.force, float(np.abs(chain.force).max()))
    # the sheave holds what line and spring leave over; the bearing takes the line's pull and what swings the link
    sheave, anchor = at["frame", "sheave"], at["frame", "spring_anchor"]
    pulled = at["chain", "chain_end" if ("chain", "chain_end") in at else next(s for p, s in at if p == "chain")]
    assert np.linalg.norm(sheave.force + anchor.force, axis=0) == pytest.approx(
        np.linalg.norm(pulled.force, axis=0), rel=1e-7, abs=1e-6
    )


@FEW
@given(released())
def test_peaks_of_the_course_are_kept(pair: Pair) -> None:
    """Greatest pull, pin force, stop, bending and torque of swing and snatch are among the rows, to the last digit."""
    course = run(pair[1])
    rows, late = moments_of(course)
    assert rows[0] == 0
    assert rows[-1] == len(course.time) - 1
    assert np.all(np.diff(rows) > 0)
    turn = turn_of(course)
    f = course.forces
    bending = f["tension"] * np.sin(np.arctan2(f["uy"], f["ux"]) - course.psi)
    looked_at: list[Floats] = [f["tension"], f["torque"], f["stop"], np.hypot(f["pin_x"], f["pin_y"]), bending]
    for values in looked_at:
        for phase, kept in ((course.time < turn, ~late), (course.time >= turn, late)):
            assert np.abs(values[rows][kept]).max() == pytest.approx(np.abs(values[phase]).max(), rel=1e-9)


@FEW
@given(released(), st.booleans())
def test_the_history_takes_the_release_without_the_shock_factor(pair: Pair, twin: bool) -> None:
    m, k = pair
    past, stack, at, course = solved(m, k, twin)
    assert past.cases == (*CASES, RELEASE, SNATCH)
    b = beyond(past)
    one, other = (members(past, stack, replace(TARGETS, shock_factor=x)) for x in (1.0, 1.5))
    for name in ("chain_on_pin", "pin_on_link", "stop_on_link", "torque", "spring_pull"):
        a, c = getattr(one, name), getattr(other, name)
        assert np.array_equal(a[..., b], c[..., b])
        # what cancels leaves rounding, by which parts of a vector that are nothing differ
        assert c[..., : b.start] == pytest.approx(1.5 * a[..., : b.start], abs=1e-9 * float(np.abs(c).max()))
    rows = load_rows(past, tuple(at.values()))
    chain = {r.case: r.magnitude for r in rows if r.part == "chain"}
    swing = course.time < turn_of(course)
    assert chain[RELEASE] == pytest.approx(np.abs(course.forces["tension"][swing]).max())
    assert chain[SNATCH] == pytest.approx(np.abs(course.forces["tension"][~swing]).max(), abs=1e-9)
    # λ, from A→O to A→B: on the stop at the start, to the width of what presses it in
    assert past.state.link_angle[b][0] == pytest.approx(float(m.seat_angle), abs=1e-6)
    assert past.state.crank_angle[b][0] >= float(past.figures.events.release)
