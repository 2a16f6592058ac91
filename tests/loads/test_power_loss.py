"""Bands of a loss of power against closed forms and brute force, and the study of whole designs."""

from __future__ import annotations

import itertools
import math
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from loads.cycle import cycle
from loads.linkage import Linkage, seated_chain_pin_at, state
from loads.power_loss.bands import RUNS_ON, STAYS, UNWINDS, arms, idle_draw, outcomes
from loads.power_loss.seat import (
    least_seat_angles,
    middle_clearance,
    with_seat,
)
from loads.power_loss.study import LOADED, UNWOUND, PowerLoss, drive_torques
from loads.spring_law import SpringLaw
from tests.loads.far_end_designs import DESIGNS
from tests.loads.machines import FAR, TABLE, linear, machine, machines
from tests.loads.power_losses import DEG, bands_of, far, fates, outcome_of, rubbing, study_of
from tests.starters import NAMES, changed, examined, text_of

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
    bands = bands_of(far(3.0, 1.5, 0.9, 0.6))
    assert bands[0].end == pytest.approx(math.asin(2.4 / 60.0), abs=1e-6)
    assert bands[0].energy_end == pytest.approx(50.0 * (60.0 * (1.0 - math.cos(bands[0].end))) ** 2, rel=1e-4)
    assert bands[1].energy_start == bands[0].energy_end
    assert bands[1].creep_ends == UNWOUND


def test_a_late_link_comes_to_rest_past_the_middle() -> None:
    m = far(-3.0)
    assert fates(m) == [UNWINDS, RUNS_ON, UNWINDS]
    middle = outcome_of(m).middle
    assert middle[0].start == pytest.approx(math.pi, abs=1e-6)
    assert middle[0].end == pytest.approx(math.pi + 3.0 * DEG * 90.0 / 30.0, abs=0.002)
    last = bands_of(m)[-1]
    assert last.creep_ends == LOADED
    assert last.creeps_to == pytest.approx(middle[0].end)
    on = bands_of(m)[1]
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
