"""Power loss: bands, coasting, seat angles and shims against closed forms, brute force and integrated motion."""

from __future__ import annotations

import itertools
import math
from dataclasses import replace
from pathlib import Path
from time import process_time

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from loads.checks.context import Context
from loads.cycle import Cycle, cycle
from loads.inertia import Inertia
from loads.linkage import Linkage, State, seated_chain_pin_at, state
from loads.power_loss.bands import RUNS_ON, STAYS, UNWINDS, Outcome, arms, idle_draw, outcomes
from loads.power_loss.coast import FIRES, TURNS_BACK, WORK, make_path
from loads.power_loss.seat import (
    GRAIN,
    SETTING,
    least_seat_angles,
    middle_clearance,
    recommended,
    trade,
    with_seat,
)
from loads.power_loss.shims import seat_with_shim, shim_for, shims
from loads.power_loss.study import LOADED, UNWOUND, Band, PowerLoss, drive_torques, make_bands
from loads.spring_law import SpringLaw, spring_energy
from parts.design import Mechanism
from parts.sizes import StopSizes
from parts.stop_layout import stop_center
from tests.loads.far_end_designs import DESIGNS
from tests.loads.machines import FAR, TABLE, linear, machine, machines
from tests.starters import NAMES, changed, examined, text_of

DEG = math.pi / 180.0
ROD = Inertia(disc=30_000.0, link_mass=0.0, link_middle=0.0, link=0.0)


def rubbing(m: Linkage, bearing: float, crank_pin: float, chain_pin: float) -> Linkage:
    return replace(
        m, friction_bearing=np.asarray(bearing), friction_crank_pin=np.asarray(crank_pin),
        friction_chain_pin=np.asarray(chain_pin),
    )  # fmt: skip


def far(beta: float, *friction: float) -> Linkage:
    """r = 60, L = 90, s = 30, nearly parallel chain."""
    return rubbing(machine(60, 90, 80, beta, FAR, 0, 1, linear(0, 100)), *(friction or (0.0, 0.0, 0.0)))


def outcome_of(m: Linkage) -> Outcome:
    found = outcomes(with_seat(m, np.array([float(m.seat_angle)])))[1][0]
    assert found is not None
    return found


def fates(m: Linkage) -> list[str]:
    return [s.fate for s in outcome_of(m).stretches]


def study_of(folder: Path, text: str) -> PowerLoss:
    found = examined(folder, text).studies["power_loss"]
    assert isinstance(found, PowerLoss)
    return found


# ---------------------------------------------------------------------------------------------- bands, closed forms


@pytest.mark.parametrize("friction", [(1.5, 0.9, 0.6), (0.4, 0.2, 1.1)])
def test_the_band_round_the_null_of_a_far_sheave(friction: tuple[float, float, float]) -> None:
    m = far(3.0, *friction)
    stays, runs = outcome_of(m).stretches[-2:]
    assert (stays.fate, runs.fate) == (STAYS, RUNS_ON)
    bearing, _, chain_pin = friction
    reach = math.hypot(*(float(v) for v in seated_chain_pin_at(m, np.asarray(0.0))))  # |OB|, nearly s
    half = math.asin((bearing + chain_pin) / reach)
    assert half == pytest.approx((bearing + chain_pin) / 30.0, rel=0.02)
    null = float(cycle(m).events.null)
    assert stays.start == pytest.approx(null - half, abs=1e-5)
    assert stays.end == pytest.approx(null + half, abs=1e-5)
    assert null == pytest.approx(2.0 * math.pi - 3.0 * DEG * 90.0 / 30.0, abs=0.002)


@pytest.mark.parametrize("friction", [(1.5, 0.9, 0.6), (1.5, 0.6, 0.9), (0.0, 0.0, 2.0)])
def test_the_condition_of_the_middle(friction: tuple[float, float, float]) -> None:
    """r sin β > μ_b ρ_b + max(μ_p ρ_A, μ_c ρ_B), in the search and in the bands on either side of it."""
    bearing, crank_pin, chain_pin = friction
    least = least_seat_angles(far(1.0, *friction))[0]
    assert least is not None
    assert least == pytest.approx(math.asin((bearing + max(crank_pin, chain_pin)) / 60.0), abs=1e-6)
    assert outcome_of(far(least / DEG + 0.001, *friction)).middle == ()
    under = outcome_of(far(least / DEG - 0.001, *friction)).middle
    assert [s.fate for s in under] == [STAYS]
    assert middle_clearance(with_seat(far(1.0, *friction), np.array([least])))[0] == pytest.approx(0.0, abs=1e-9)


def test_the_first_band_and_the_energies() -> None:
    """At the start the arm is r sin θ; it stays while the bearing and the crank pin take that."""
    bands = _bands(far(3.0, 1.5, 0.9, 0.6))
    assert bands[0].end == pytest.approx(math.asin(2.4 / 60.0), abs=1e-6)
    assert bands[0].energy_end == pytest.approx(50.0 * (60.0 * (1.0 - math.cos(bands[0].end))) ** 2, rel=1e-4)
    assert bands[1].energy_start == bands[0].energy_end
    assert bands[1].creep_ends == UNWOUND


def _bands(m: Linkage) -> tuple[Band, ...]:
    f = cycle(m)
    row = next(r for r in trade(m, {"as designed": float(m.seat_angle)}) if r.marks)
    return make_bands(m, f.events, make_path(m, f, ROD, 2.0 * math.pi - 1.0, row.outcome.release), row)


def test_a_late_link_comes_to_rest_past_the_middle() -> None:
    m = far(-3.0)
    assert fates(m) == [UNWINDS, RUNS_ON, UNWINDS]
    middle = outcome_of(m).middle
    assert middle[0].start == pytest.approx(math.pi, abs=1e-6)
    assert middle[0].end == pytest.approx(math.pi + 3.0 * DEG * 90.0 / 30.0, abs=0.002)
    last = _bands(m)[-1]
    assert last.creep_ends == LOADED
    assert last.creeps_to == pytest.approx(middle[0].end)
    on = _bands(m)[1]
    assert on.creep_ends == LOADED
    assert on.creeps_to == pytest.approx(middle[0].end)
    assert outcome_of(m).self_firing is None


def test_friction_holds_the_link_past_the_release() -> None:
    for beta in (3.0, 0.0, -3.0):
        held = outcome_of(far(beta, 1.5, 0.9, 0.6)).release
        assert held == pytest.approx(2.0 * math.pi - beta * DEG + math.asin(1.5 / 90.0), abs=1e-6)
    # a machine that would release at its null fires itself a little, because friction delays the release
    assert outcome_of(far(0.0, 1.5, 0.9, 0.6)).self_firing == pytest.approx(
        (2 * math.pi, 2 * math.pi + 1.5 / 90), abs=1e-5
    )
    assert outcome_of(far(0.0)).self_firing is None or outcome_of(far(0.0)).self_firing == pytest.approx(
        (2 * math.pi,) * 2
    )


def test_slack_stays() -> None:
    m = machine(60, 90, 80, 3, FAR, 0, 1, linear(0, 100), slack=10.0)
    first, second = outcome_of(m).stretches[:2]
    assert (first.fate, second.fate) == (STAYS, UNWINDS)
    assert first.end == pytest.approx(math.acos(1.0 - 10.0 / 60.0), abs=1e-5)


def test_the_flat_foot_of_a_table_stays() -> None:
    law = SpringLaw(np.asarray(0.0), np.asarray(0.0), np.array([0.0, 5.0, 300.0]), np.array([0.0, 0.0, 9000.0]))
    assert idle_draw(law) == 5.0
    first = outcome_of(machine(60, 90, 80, 3, FAR, 0, 1, law)).stretches[0]
    assert first.fate == STAYS
    assert first.end == pytest.approx(math.acos(1.0 - 5.0 / 60.0), abs=1e-5)
    law = SpringLaw(np.asarray(0.0), np.asarray(0.0), np.array([0.0, 300.0]), np.array([600.0, 9000.0]))
    assert idle_draw(law) == 0.0


def test_a_constant_force() -> None:
    """The fate does not depend on the tension, so a weight and a spring of any rate have the same bands."""
    m = rubbing(TABLE["up"], 0.6, 0.3, 0.4)
    other = replace(m, spring=linear(10, 700), efficiency=np.asarray(0.8))
    assert outcome_of(m) == outcome_of(other)
    assert [s.fate for s in outcome_of(m).stretches] == [STAYS, UNWINDS, STAYS, RUNS_ON]


# ---------------------------------------------------------------------------------------------- bands, any machine


@settings(max_examples=60, deadline=None)
@given(machines(friction=True), st.integers(0, 2**32 - 1))
def test_bands_cover_the_turn_and_agree_with_the_torques(m: Linkage, seed: int) -> None:
    at = cycle(m).events
    if not np.isfinite(float(at.release) + float(at.null)):
        return
    rows = outcome_of(m).stretches
    assert rows[0].start == 0.0
    assert rows[-1].end == pytest.approx(float(at.release), abs=1e-12)
    for one, next_ in itertools.pairwise(rows):
        assert one.end == next_.start
        assert one.fate != next_.fate
    theta = np.random.default_rng(seed).uniform(0.0, float(at.release), 400)
    edges = np.array([s.end for s in rows])
    clear = np.abs(theta[:, None] - edges).min(-1) > 1e-7
    s = state(m, theta, at.catch)
    want = np.where(np.abs(s.torque) <= s.friction_torque, STAYS, np.where(s.torque > 0.0, UNWINDS, RUNS_ON))
    fate = np.array([r.fate for r in rows])[np.searchsorted(edges, theta)]
    assert (fate == want)[clear].all()


@settings(max_examples=40, deadline=None)
@given(machines())
def test_without_friction_it_stays_only_without_torque(m: Linkage) -> None:
    at = cycle(m).events
    if not np.isfinite(float(at.release) + float(at.null)):
        return
    for s in outcome_of(m).stretches:
        if s.fate == STAYS:
            inside = state(m, np.linspace(s.start, s.end, 9)[1:-1], at.catch)
            assert inside.torque == pytest.approx(0.0, abs=1e-6)


@settings(max_examples=30, deadline=None)
@given(
    st.floats(-4, 7), st.floats(-math.pi, math.pi), st.sampled_from([-1.0, 1.0]), st.sampled_from([-1.0, 1.0]),
    st.floats(0.0, 2.0), st.floats(0.0, 2.0), st.floats(0.0, 2.0),
)  # fmt: skip
def test_mirror_images_have_the_same_map(
    beta: float, bearing: float, side: float, turn: float, b: float, p: float, c: float
) -> None:
    x, y = 400.0 * math.cos(bearing), 400.0 * math.sin(bearing)

    def made(flip: float) -> Linkage:
        return rubbing(
            machine(55, 85, 70, beta, (x, flip * y), 45, flip * side, linear(500, 180), turn=flip * turn), b, p, c
        )

    one, other = outcomes(with_seat(made(1.0), np.array([beta * DEG])))[1][0], outcome_of(made(-1.0))
    assert one is not None
    assert [s.fate for s in one.stretches] == [s.fate for s in other.stretches]
    assert [s.end for s in one.stretches] == pytest.approx([s.end for s in other.stretches], abs=1e-9)
    assert least_seat_angles(made(1.0))[0] == pytest.approx(least_seat_angles(made(-1.0))[0], abs=1e-9)


def test_a_pair_of_edges_between_two_samples_is_found() -> None:
    """A crossing and its return within a hundredth of a degree, where no grid of two degrees sees them."""
    m = far(3.0, 1.5, 1.5, 0.6)
    arm = arms(m.expanded(), cycle(m).events.catch[..., None], np.array([math.pi / 2]))[0][0]
    # friction as large as the largest arm of the first half, less a hair, leaves a sliver that unwinds
    tight = replace(m, friction_bearing=np.asarray(float(arm) - 1e-7), friction_crank_pin=np.asarray(0.0))
    unwinds = [s for s in outcome_of(tight).stretches if s.fate == UNWINDS]
    assert len(unwinds) == 1
    assert unwinds[0].end - unwinds[0].start == pytest.approx(2.0 * math.acos(1.0 - 1e-7 / 60.0), rel=1e-2)


def test_drive_torques() -> None:
    m = rubbing(replace(TABLE["near"], slack=np.asarray(0.0)), 1.5, 0.9, 0.6)
    at = cycle(m).events
    rows = outcome_of(m).stretches
    forward, back = drive_torques(m, at, rows)
    for i, row in enumerate(rows):
        theta = np.linspace(np.nextafter(row.start, 9.0), row.end, 4001)
        s = state(m, theta, at.catch)
        assert forward[i] == pytest.approx(max(0.0, float((s.torque + s.friction_torque).max())), rel=1e-3, abs=1e-3)
        assert back[i] == pytest.approx(max(0.0, float((s.friction_torque - s.torque).max())), rel=1e-3, abs=1e-3)
        assert (back[i] < 1e-6) == (row.fate == UNWINDS)
        assert (forward[i] < 1e-6) == (row.fate == RUNS_ON)


# ---------------------------------------------------------------------------------------------- coasting


def _integrated(m: Linkage, f: Cycle, start: float, way: float, contact: float, back: float) -> tuple[float, float]:
    """Where a machine let go first stands still (rad) and its fastest (rad/s): equation of motion, Runge-Kutta."""
    m = replace(m, efficiency=np.asarray(1.0))
    behind = replace(m, seat_angle=np.asarray(back))

    def pull(theta: float, omega: float) -> float:
        one = np.array([theta])
        s: State = state(behind, one, np.asarray(-9e9)) if theta < contact else state(m, one, f.events.catch)
        rub = float(s.friction_torque[0])
        return (-float(s.torque[0]) - math.copysign(rub, omega)) * WORK / ROD.disc

    # steps in proportion to how fast the spring's energy makes it
    step = 2e-5 * math.sqrt(1e6 / float(spring_energy(m.spring, np.asarray(f.draw_at_hold))))
    theta, omega, fastest = start, way * 1e-9, 0.0
    for _ in range(40_000):
        last = theta, omega
        k1 = pull(theta, omega)
        k2 = pull(theta + omega * step / 2, omega + k1 * step / 2)
        k3 = pull(theta + (omega + k1 * step / 2) * step / 2, omega + k2 * step / 2)
        k4 = pull(theta + (omega + k2 * step / 2) * step, omega + k3 * step)
        theta += step * (omega + step * (k1 + k2 + k3) / 6)
        omega += step * (k1 + 2 * k2 + 2 * k3 + k4) / 6
        fastest = max(fastest, abs(omega))
        if omega * way <= 0.0:
            return last[0] - last[1] ** 2 / (2.0 * pull(*last)), fastest
    raise AssertionError("never stood still")


@pytest.mark.parametrize(("name", "start"), [("near", 2.0), ("near", 5.6), ("up", 5.5)])
def test_coasting_back_is_the_integrated_motion(name: str, start: float) -> None:
    m = rubbing(TABLE[name], 1.5, 0.9, 0.6) if name == "near" else rubbing(TABLE[name], 0.7, 0.3, 0.3)
    f, back = cycle(m), 2.0 * math.pi + float(m.seat_angle) - 0.9
    path = make_path(m, f, ROD, back, float(f.events.release))
    coast = path.coast(start, forwards=False)
    end, fastest = _integrated(m, f, start, -1.0, path.back_contact, back)
    assert coast.how == TURNS_BACK
    assert coast.end == pytest.approx(end, abs=2e-4)
    assert coast.speed == pytest.approx(fastest, rel=1e-3)
    assert coast.kinetic_at_start is not None
    assert end < (path.back_contact if start > 5.0 else 0.0)


def test_coasting_on_from_the_middle_is_the_integrated_motion() -> None:
    m = rubbing(replace(TABLE["near"], seat_angle=np.asarray(-6.0 * DEG)), 0.2, 0.1, 0.1)
    f = cycle(m)
    path = make_path(m, f, ROD, 5.0, float(f.events.release))
    start = next(s.start for s in outcome_of(m).stretches if s.fate == RUNS_ON) + 0.01
    coast = path.coast(start, forwards=True)
    end, fastest = _integrated(m, f, start, 1.0, -9.0, 5.0)
    assert coast.end == pytest.approx(end, abs=2e-4)
    assert coast.speed == pytest.approx(fastest, rel=1e-3)
    assert coast.kinetic_at_start is None


def test_without_friction_it_comes_back_up_as_far_as_it_was_drawn() -> None:
    m = TABLE["far+3"]
    f, back = cycle(m), 2.0 * math.pi + 3.0 * DEG - 0.9
    path = make_path(m, f, ROD, back, float(f.events.release))
    coast = path.coast(5.9, forwards=False)
    assert coast.end is not None
    there = state(replace(path.machine, seat_angle=np.asarray(back)), np.array([coast.end]), np.asarray(-9e9))
    assert there.pull[0] == pytest.approx(float(path.state(np.array([5.9])).pull[0]), abs=1e-6)
    energy = float(spring_energy(m.spring, path.state(np.array([5.9])).draw)[0])
    assert coast.kinetic_at_start == pytest.approx(energy, rel=1e-9)
    assert coast.speed == pytest.approx(math.sqrt(2.0 * WORK * energy / ROD.disc), rel=1e-9)
    # the link meets the back of its stop where a chain that is far away says so
    assert path.back_contact == pytest.approx(-(math.pi + 3.0 * DEG - 0.9), abs=1e-5)


def test_from_the_end_it_coasts_over_the_hill_in_the_middle() -> None:
    """β < 0: creeping it rests in the middle, let go it does not even notice it."""
    m = far(-3.0, 0.5, 0.3, 0.3)
    last = next(b for b in reversed(_bands(m)) if b.fate == UNWINDS)
    assert last.creep_ends == LOADED
    assert last.hill is not None
    assert last.hill.arriving > 100.0 * last.hill.takes > 0.0
    assert last.coast is not None
    assert last.coast.end is not None
    assert last.coast.end < 0.0
    # far+3 with a wide middle: the hill is the energy on its two sides and the friction between
    assert last.hill.arriving < last.energy_end


def test_a_machine_at_the_end_fires() -> None:
    m = rubbing(TABLE["near"], 0.2, 0.1, 0.1)
    f = cycle(m)
    end = outcome_of(m)
    assert end.fires_from is not None
    coast = make_path(m, f, ROD, 5.0, end.release).coast(end.fires_from, forwards=True)
    assert (coast.how, coast.end) == (FIRES, None)
    assert coast.speed_at == pytest.approx(end.release)
    assert coast.speed > 0.0


def test_inertia_of_a_link_of_point_masses() -> None:
    r, lam, rate = 58.0, 2.2, -0.4
    rod = [(0.3, 10.0), (0.2, 50.0), (0.5, 90.0)]  # kg, mm from A
    m = sum(w for w, _ in rod)
    inertia = Inertia(1000.0, m, sum(w * x for w, x in rod) / m, sum(w * x * x for w, x in rod))
    h = 1e-6

    def at(x: float, theta: float) -> complex:
        direction = math.pi + lam + rate * theta  # A→B in the machine, λ the angle to A→O at θ = 0
        return r * complex(math.cos(theta), math.sin(theta)) + x * complex(math.cos(direction), math.sin(direction))

    want = 1000.0 + sum(w * abs((at(x, h) - at(x, -h)) / (2 * h)) ** 2 for w, x in rod)
    assert float(inertia.about_disc(r, np.asarray(lam), np.asarray(rate))) == pytest.approx(want, rel=1e-6)


def test_inertia_of_the_made_parts(tmp_path: Path) -> None:
    """Two discs of steel are most of it; the drive's is beside it, and slows the coasting."""
    plain = study_of(tmp_path, text_of("impact-rig"))
    e = examined(tmp_path, text_of("impact-rig"))
    disc = e.sizes.disc
    solid = 2 * 7850e-9 * math.pi / 32.0 * disc.outer_diameter**4 * disc.thickness
    assert 0.8 * solid < plain.inertia.disc < 1.2 * solid
    assert plain.seated_inertia > plain.inertia.disc
    with_drive = replace(plain.inertia, drive=3.0 * plain.inertia.disc)
    path = make_path(e.machine, e.figures, with_drive, 5.0, float(e.figures.events.release))
    coast = path.coast(5.0, forwards=False)
    assert coast.speed_with_drive is not None
    assert coast.speed_with_drive == pytest.approx(coast.speed / 2.0, rel=0.03)


# ---------------------------------------------------------------------------------------------- seat angles, shims


def test_the_recommended_seat_angle() -> None:
    m = far(3.0, 1.5, 0.9, 0.6)
    least, scattered = least_seat_angles(m)
    assert least is not None
    assert scattered is not None
    assert scattered == pytest.approx(math.asin(1.5 * 2.4 / 60.0), abs=1e-6)
    choice, why = recommended(m, least, scattered)
    assert choice is not None
    assert 0.0 <= choice - scattered < GRAIN
    assert choice / GRAIN == pytest.approx(round(choice / GRAIN))
    assert "1.5 times the friction" in why
    assert "rule of our own" in why
    smooth = least_seat_angles(far(3.0))
    assert smooth == pytest.approx([0.0, 0.0], abs=1e-9)
    assert recommended(far(3.0), *smooth)[0] == pytest.approx(SETTING)


def test_a_seat_angle_that_gives_the_disc_too_much_is_not_recommended() -> None:
    """s of 9 mm only: past the null the pull falls fast. Half the friction would recommend what it needs."""
    m = rubbing(machine(60, 69, 64, 3, FAR, 0, 1, linear(0, 100)), 4.0, 1.0, 1.0)
    least, scattered = least_seat_angles(m)
    choice, why = recommended(m, least, scattered)
    assert choice is None or (least is not None and scattered is not None and least <= choice < scattered)
    assert "2%" in why
    assert recommended(m, None, None)[0] is None


def test_too_much_friction_has_no_least_seat_angle() -> None:
    m = far(3.0, 25.0, 0.9, 0.6)
    assert least_seat_angles(m) == [None, None]
    assert "no seat angle" in recommended(m, None, None)[1]


def test_the_trade_over_seat_angle() -> None:
    m = far(3.0, 1.5, 0.9, 0.6)
    least = least_seat_angles(m)[0]
    rows = trade(m, {"as designed": 3.0 * DEG, "least": least})
    assert [round(r.seat / DEG, 2) for r in rows] == [-3, -2, -1, 0, 1, 2, 2.29, 3, 4, 5]
    assert [r.marks for r in rows if r.marks] == [("least",), ("as designed",)]
    for row in rows:
        alone = outcome_of(replace(m, seat_angle=np.asarray(row.seat)))
        assert [s.end for s in alone.stretches] == pytest.approx([s.end for s in row.outcome.stretches], abs=1e-9)
        assert (row.middle is None) == (row.seat >= (least or 0.0) - 1e-9)
        assert (row.clearance < -1e-9) == (row.middle is not None)
    firing = [r.outcome.self_firing for r in rows]
    widths = [0.0 if f is None else f[1] - f[0] for f in firing]
    assert widths == sorted(widths)
    wide = trade(m, {"as designed": 9.5 * DEG})
    assert wide[-1].seat == pytest.approx(10.0 * DEG)
    assert wide[0].seat == pytest.approx(-3.0 * DEG)


POST = StopSizes("post", 25.0, 0.0, 0.0, 14.0, 0.0, "M8", 0.0, 0.0, None)  # type: ignore[arg-type]
BLOCK = StopSizes("block", 0.0, 30.0, 24.0, 14.0, 6.0, "M8", 9.0, 6.8, None)  # type: ignore[arg-type]
M = Mechanism("twin", "ccw", 58.0, 86.0, 3.0 * DEG, 71.0, 4.0 * DEG)
WIDTH = 40.0


def _off_axis(point: tuple[float, float], direction: float) -> float:
    """Distance (mm) of a point of the disc frame from the link's axis, positive where the stop stands at the seat."""
    x, y = point[0] - M.crank_radius, point[1]
    return math.sin(direction) * x - math.cos(direction) * y


@pytest.mark.parametrize("thickness", [-1.0, 0.0, 0.4, 2.5])
def test_a_shim_on_a_post(thickness: float) -> None:
    seat = seat_with_shim(M, WIDTH, POST, thickness)
    assert seat is not None
    axis = stop_center(M, WIDTH, POST)[0]
    assert _off_axis(axis, math.pi + seat) == pytest.approx(WIDTH / 2 + POST.diameter / 2 + thickness, abs=1e-9)
    assert shim_for(M, WIDTH, POST, seat) == pytest.approx(thickness, abs=1e-9)
    assert (seat > M.seat_angle + 1e-9) == (thickness > 0.0)


@pytest.mark.parametrize("thickness", [-1.0, 0.0, 0.4, 2.5])
def test_a_shim_on_a_block(thickness: float) -> None:
    seat = seat_with_shim(M, WIDTH, BLOCK, thickness)
    assert seat is not None
    (x, y), direction = stop_center(M, WIDTH, BLOCK)
    up = BLOCK.width / 2 + thickness  # from the block's middle, square to its face, towards the link
    spot = (x - up * math.sin(direction), y + up * math.cos(direction))
    assert _off_axis(spot, math.pi + seat) == pytest.approx(WIDTH / 2, abs=1e-9)
    assert shim_for(M, WIDTH, BLOCK, seat) == pytest.approx(thickness, abs=1e-9)


def test_the_table_of_shims() -> None:
    rows = shims(M, WIDTH, POST, (0.0, 0.5, 1.0, 9.0), {"least": 2.5 * DEG, "recommended": 4.0 * DEG})
    assert [r.mark for r in rows] == ["least", "", "", "", "recommended"]
    assert rows[0].thickness < 0.0 == rows[1].thickness
    assert [r.seat for r in rows] == sorted(r.seat for r in rows)
    assert seat_with_shim(M, WIDTH, POST, 50.0) is None


# ---------------------------------------------------------------------------------------------- whole designs


@pytest.mark.parametrize("name", NAMES)
def test_every_starter_has_the_study(tmp_path: Path, name: str) -> None:
    e = examined(tmp_path, text_of(name))
    study = e.studies["power_loss"]
    assert isinstance(study, PowerLoss)
    assert study.bands[-1].end == pytest.approx(float(e.figures.events.release))
    assert study.checks == ()
    assert study.back_contact is not None
    assert -math.pi < study.back_contact < -math.pi / 2.0
    assert study.least is not None
    assert study.recommended is not None
    assert study.least < study.recommended
    own = study_of(tmp_path, changed(name, mechanism__seat_angle=f'"{study.recommended + 1e-6} rad"'))
    assert not any("does not unwind" in text for text in own.cautions)


@pytest.mark.parametrize("kind", DESIGNS)
def test_every_far_end_has_the_study(tmp_path: Path, kind: str) -> None:
    study = study_of(tmp_path, DESIGNS[kind])
    assert {b.fate for b in study.bands} >= {UNWINDS, STAYS}
    assert study.least is not None
    assert len(study.rows) > 8
    for band in study.bands:
        assert math.isfinite(band.energy_start + band.energy_end + band.torque_forward + band.torque_back)
        assert (band.coast is None) == (band.fate == STAYS)


def test_cautions_say_where_it_does_not_unwind(tmp_path: Path) -> None:
    rough = study_of(tmp_path, changed("soil-tamper", mechanism__seat_angle='"-2 deg"'))
    text = rough.cautions[0]
    middle = rough.designed.outcome.middle
    assert [s.fate for s in middle] == [STAYS, RUNS_ON, STAYS]
    for s in middle:
        assert f"{s.fate} from {math.degrees(s.start):.1f}° to {math.degrees(s.end):.1f}°" in text
    assert "−2.00°" in text
    assert f"{math.degrees(rough.least or 0.0):.2f}°" in text
    assert not any("fires by itself" in t for t in rough.cautions)
    good = study_of(tmp_path, text_of("soil-tamper"))
    assert not any("not unwind" in t for t in good.cautions)
    assert sum("fires by itself" in t for t in good.cautions) == 1
    assert any("past 0°" in t and "rpm" in t for t in good.cautions)


def test_a_hold_within_the_band_of_the_null_is_said(tmp_path: Path) -> None:
    tight = study_of(tmp_path, changed("soil-tamper", mechanism__hold_margin='"3 deg"'))
    assert tight.fate_at_hold == STAYS
    text = next(t for t in tight.cautions if "at its hold" in t)
    wanted = math.degrees(tight.hold_margin_wanted)
    assert f"{wanted:.1f}°" in text
    enough = study_of(tmp_path, changed("soil-tamper", mechanism__hold_margin=f'"{wanted:.1f} deg"'))
    assert enough.fate_at_hold == UNWINDS
    assert not any("at its hold" in t for t in enough.cautions)


def test_it_is_cheap(tmp_path: Path) -> None:
    from loads.power_loss import study as module

    kept: list[float] = []
    run = module.power_loss_study

    def timed(c: Context) -> PowerLoss | None:
        for _ in range(3):
            begin = process_time()
            found = run(c)
            kept.append(process_time() - begin)
        return found

    from loads.studies import registry

    before = dict(registry.STUDIES)
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(registry, "STUDIES", {**before, "power_loss": timed})
        examined(tmp_path, text_of("impact-rig"))
    assert min(kept) < 0.1
