"""The drive study against closed forms of a direct current motor, a second integrator, and itself turned round."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from functools import lru_cache
from pathlib import Path
from tempfile import TemporaryDirectory

import numpy as np
import pytest
from scipy.integrate import quad, solve_ivp

from loads.drive import Disc, DriveStudy, Winding, at_hold, at_motor, demands, driven, motor_speed, winding
from loads.examine import Examination
from loads.linkage import state
from loads.practice import value
from parts.design import Drive, Floats
from tests.loads.far_end_designs import DESIGNS
from tests.loads.machines import TABLE
from tests.starters import NAMES, context_of, examined, text_of

MOTOR = 'stall_torque = "3 N·m"\nfree_speed = "3000 rpm"\nsupply_voltage = 24\nreduction = 600\nefficiency = 0.8\n'


@lru_cache(maxsize=32)
def machine(text: str, drive: str | None = MOTOR) -> Examination:
    with TemporaryDirectory() as folder:
        return examined(Path(folder), text if drive is None else f"{text}\n[drive]\n{drive}\n")


def study(e: Examination) -> DriveStudy:
    found = e.studies["drive"]
    assert isinstance(found, DriveStudy)
    return found


@dataclass(frozen=True, slots=True)
class Slope(Winding):
    """A load of ``base + slope·θ`` in place of a machine's."""

    base: float = 0.0
    slope: float = 0.0

    def load(self, theta: Floats) -> Floats:
        return np.asarray(self.base + self.slope * theta)


def sloping(base: float, slope: float) -> Slope:
    return Slope(TABLE["far"], 3.0, 6.0, np.array([0.0, 3.0, 6.0]), base, slope)


def disc_of(peak: float, hold: float = 0.0, back: float = 0.0) -> Disc:
    return Disc(peak, 0.0, peak, peak, 0.0, peak, 6.0 * peak, peak, hold, 0.0, back)


def motor(**values: float | None) -> Drive:
    given: dict[str, float | None] = {
        "stall_torque": 4000.0, "free_speed": 480.0, "torque_constant": 50.0, "supply_voltage": 24.0, "reduction": 60.0,
        "efficiency": 0.8, "backdriving_efficiency": 0.75, "holding_torque": None, "inertia": None, "encoder_counts": None,
    }  # fmt: skip
    given |= values
    return Drive(**given, encoder_on="disc")  # type: ignore[arg-type]


# ------------------------------------------------------------------------------------------------- closed forms


def test_a_constant_torque() -> None:
    """τ = 96 N·m/(60 × 0.8) = 2 N·m, half of the stall: half the free speed, half the stall current of 80 A."""
    d = driven(sloping(96_000.0, 0.0), disc_of(96_000.0), motor(), 4000.0, 480.0)
    time = 6.0 * 60.0 / 240.0
    assert d.time == pytest.approx(time)
    assert d.peak == pytest.approx(2000.0)
    assert d.peak_current == pytest.approx(40.0)
    assert d.charge == pytest.approx(40.0 * time)
    assert d.energy == pytest.approx(24.0 * 40.0 * time)
    assert d.peak_power == pytest.approx(2000.0 * 240.0)
    assert d.mean_power == pytest.approx(2000.0 * 240.0)
    # half of the supply's energy at half of the stall
    assert d.shaft_energy == pytest.approx(0.5 * 1000.0 * 24.0 * 40.0 * time)
    assert d.starts_anywhere


def test_a_rising_torque() -> None:
    """ω falls as the load rises by a θ: t = −(N/ω_0)(M_s/a) ln(1 − aθ/M_s)."""
    a, stall = 30_000.0, 4000.0 * 60.0 * 0.8
    d = driven(sloping(0.0, a), disc_of(6.0 * a), motor(), 4000.0, 480.0)
    assert d.time == pytest.approx(-(60.0 / 480.0) * (stall / a) * math.log(1.0 - a * 6.0 / stall), rel=1e-6)


def test_a_motor_that_stalls() -> None:
    d = driven(sloping(0.0, 40_000.0), disc_of(240_000.0), motor(), 4000.0, 480.0)
    assert (d.time, d.energy, d.charge, d.mean_power, d.peak_power) == (None, None, None, None, None)
    assert not d.starts_anywhere
    assert d.peak == pytest.approx(5000.0)


def test_a_load_that_drives_gives_no_current_and_runs_faster() -> None:
    d = driven(sloping(-96_000.0, 0.0), disc_of(-96_000.0), motor(), 4000.0, 480.0)
    braking = 96_000.0 * 0.75 / 60.0
    assert d.time == pytest.approx(6.0 * 60.0 / (480.0 * (1.0 + braking / 4000.0)))
    assert d.charge == 0.0


def test_gear_both_ways() -> None:
    torque = at_motor(np.array([100.0, -100.0]), 10.0, 0.8, 0.75)
    assert torque == pytest.approx([12.5, -7.5])


def test_the_line() -> None:
    assert motor_speed(np.array([0.0, 2000.0, 4000.0, 5000.0, -4000.0]), 4000.0, 480.0) == pytest.approx(
        [480.0, 240.0, 0.0, 0.0, 960.0]
    )


# ----------------------------------------------------------------------------------------------- whole machines


@pytest.mark.parametrize("name", NAMES)
def test_time_and_charge_by_another_integrator(name: str) -> None:
    e = machine(text_of(name), MOTOR)
    d = study(e).driven
    assert d is not None
    catch, hold = e.figures.events.catch, float(e.figures.events.hold)

    def rate(_: float, y: Floats) -> list[float]:
        s = state(e.machine, np.array([min(float(y[0]), hold)]), catch)
        load = float(s.torque[0] + s.friction_torque[0])
        torque = load / (600.0 * 0.8) if load >= 0.0 else load * 0.75 / 600.0
        speed = 100.0 * math.pi * (1.0 - torque / 3000.0)
        return [speed / 600.0, max(torque, 0.0) / (24_000.0 / (100.0 * math.pi))]

    def over(_: float, y: Floats) -> float:
        return float(y[0]) - hold

    over.terminal = True  # type: ignore[attr-defined]
    found = solve_ivp(rate, (0.0, 100.0), [0.0, 0.0], events=over, rtol=1e-8, atol=1e-8, max_step=0.02)
    assert d.time == pytest.approx(float(found.t[-1]), rel=2e-4)
    assert d.charge == pytest.approx(float(found.y[1, -1]), rel=2e-4)


@pytest.mark.parametrize("name", [*NAMES, "slide"])
def test_without_friction_the_work_is_the_spring_s(name: str) -> None:
    text = DESIGNS[name] if name in DESIGNS else text_of(name)
    e = machine(f"{text}\n[friction]\nbearing = 0\ncrank_pin = 0\nchain_pin = 0\n", None)
    assert study(e).disc.energy == pytest.approx(float(e.figures.stored_energy / e.machine.efficiency), rel=1e-6)
    assert study(e).disc.mean == pytest.approx(float(e.figures.mean_torque), rel=1e-6)


def test_the_work_with_friction_by_another_quadrature() -> None:
    e = machine(text_of("impact-rig"), None)
    catch, hold = e.figures.events.catch, float(e.figures.events.hold)

    def load(theta: float) -> float:
        s = state(e.machine, np.array([theta]), catch)
        return float(s.torque[0] + s.friction_torque[0])

    whole = quad(load, 0.0, hold, points=[float(catch)], limit=200)[0]
    assert study(e).disc.energy == pytest.approx(whole, rel=1e-6)
    assert study(e).disc.peak == pytest.approx(max(load(x) for x in np.linspace(0.0, hold, 2001)), rel=1e-4)


@pytest.mark.parametrize("name", NAMES)
@pytest.mark.parametrize("time", [1.0, 4.0, 30.0])
def test_the_motor_that_is_asked_for_winds_in_that_time(name: str, time: float) -> None:
    e = machine(text_of(name), f"winding_time = {time}")
    want = study(e).demands
    assert want is not None
    assert want.time == time
    c = context_of(e)
    same = driven(
        winding(c), study(e).disc, motor(reduction=1.0, efficiency=1.0, torque_constant=None), want.stall, want.free
    )
    assert same.time == pytest.approx(time, rel=1e-6)
    assert same.stall / same.peak == pytest.approx(value("motor", "stall_margin"))
    assert want.largest_power == pytest.approx(want.stall / 2.0 * want.free / 2.0)
    assert same.peak_power is not None
    assert same.peak_power <= want.largest_power * (1.0 + 1e-9)


def test_demands_of_a_constant_load() -> None:
    """Stall 1.5 times the load: a third of the free speed is left."""
    want = demands(sloping(1000.0, 0.0), disc_of(1000.0), 2.0)
    assert want.stall == pytest.approx(1500.0)
    assert want.free == pytest.approx(3.0 * 6.0 / 2.0)
    assert want.speed == pytest.approx(3.0)
    assert want.mean_power == pytest.approx(6000.0 / 2.0)


def test_without_a_table_there_are_demands_and_no_checks() -> None:
    e = machine(text_of("impact-rig"), None)
    found = study(e)
    assert found.driven is None
    assert found.checks == ()
    assert found.demands is not None
    assert found.demands.time == 4.0
    (row,) = [row for row in e.assumed if row.key.startswith("drive")]
    assert (row.key, row.value, row.quantity) == ("drive.winding_time", 4.0, "time")
    given = machine(text_of("impact-rig"), 'winding_time = "2 s"')
    assert not any(row.key.startswith("drive") for row in given.assumed)
    with_motor = machine(text_of("impact-rig"))
    assert study(with_motor).demands is None


def test_shock_is_for_the_gear() -> None:
    e = machine(text_of("soil-tamper"), None)
    assert study(e).disc.peak_with_shock == pytest.approx(1.5 * study(e).disc.peak)


def test_checks_of_a_motor() -> None:
    e = machine(text_of("impact-rig"), MOTOR + "winding_time = 10\nencoder_counts = 1024\nholding_torque = 1\n")
    found, rows = study(e), {row.check: row for row in study(e).checks}
    d = found.driven
    assert d is not None
    assert set(rows) == {
        "starts from every angle", "stall torque", "winding time", "holds at the hold", "encoder resolution",
    }  # fmt: skip
    assert rows["stall torque"].safety_factor == pytest.approx(3000.0 / d.peak)
    assert rows["stall torque"].target == 1.5
    assert rows["starts from every angle"].demand > rows["stall torque"].demand  # friction at a standstill
    assert rows["winding time"].safety_factor == pytest.approx(10.0 / (d.time or 0.0))
    # 49.2 N·m at the hold, 0.75/600 of it at the motor
    assert rows["holds at the hold"].demand == pytest.approx(float(e.figures.hold_torque) * 0.75 / 600.0)
    assert rows["holds at the hold"].capacity == pytest.approx(1000.0)
    # 4° held: a count of 0.4°
    assert rows["encoder resolution"].demand == pytest.approx(900.0)
    assert rows["encoder resolution"].holds
    assert all(row in e.checks for row in rows.values())
    assert found.cautions == ()


def test_a_weak_motor_falls_short() -> None:
    e = machine(text_of("impact-rig"), MOTOR.replace("600", "250") + "winding_time = 10\n")
    rows = {row.check: row for row in study(e).checks}
    assert not rows["starts from every angle"].holds
    assert not rows["stall torque"].holds
    assert not rows["winding time"].holds
    d = study(e).driven
    assert d is not None
    assert (d.time, d.starts_anywhere) == (None, False)


def test_an_encoder_on_the_motor_counts_through_the_gear() -> None:
    on_disc = study(machine(text_of("impact-rig"), MOTOR + 'encoder_counts = 16\nencoder_on = "disc"\n'))
    on_motor = study(machine(text_of("impact-rig"), MOTOR + 'encoder_counts = 16\nencoder_on = "motor"\n'))
    assert (on_disc.counts_there, on_motor.counts_there) == (16.0, 9600.0)
    assert [row.holds for study_ in (on_disc, on_motor) for row in study_.checks if row.site == "encoder"] == [
        False,
        True,
    ]


def test_a_gear_that_locks_itself_holds_without_the_motor() -> None:
    e = machine(text_of("impact-rig"), MOTOR.replace("0.8", "0.45"))
    found = study(e)
    assert found.drive is not None
    assert at_hold(found.disc, found.drive) == 0.0
    row = next(row for row in found.checks if row.check == "holds at the hold")
    assert row.safety_factor is None
    assert row.holds
    assert not any("own current" in text for text in found.cautions)


def test_no_brake_is_cautioned() -> None:
    assert any("motor's own current" in text for text in study(machine(text_of("impact-rig"))).cautions)


def test_unloading_backwards_by_hand() -> None:
    """Backwards the spring gives F η h less friction: nothing that winding does not ask more of."""
    e = machine(text_of("impact-rig"))
    found = study(e)
    s, eta = e.past.state, float(e.machine.efficiency)
    wound = s.crank_angle <= float(e.figures.events.hold)
    given = (s.force * eta * s.line.arm - s.friction_torque * eta**2)[wound]
    assert found.disc.back_brake == pytest.approx(float(given.max()), rel=1e-9)
    assert found.driven is not None
    assert found.driven.unloads
    assert found.driven.back_brake == pytest.approx(found.disc.back_brake * 0.75 / 600.0)
    # where friction alone would hold it, the motor has to push: by no more than the friction
    assert 0.0 < found.disc.back_drive < float(s.friction_torque.max())


def test_a_motor_too_weak_to_brake_can_not_unload() -> None:
    weak = driven(sloping(100.0, 0.0), disc_of(100.0, back=400_000.0), motor(), 4000.0, 480.0)
    assert not weak.unloads
    strong = driven(sloping(100.0, 0.0), disc_of(100.0, back=300_000.0), motor(), 4000.0, 480.0)
    assert strong.unloads


def test_a_late_seat_drives_the_disc_in_the_middle() -> None:
    e = machine(text_of("impact-rig").replace('seat_angle = "3 deg"', 'seat_angle = "-6 deg"'))
    assert study(e).disc.least < 0.0
    assert study(e).disc.back_drive > -study(e).disc.least


def test_current_at_the_hold() -> None:
    """I = τ/k with k = V/ω_0, and I²R with R = V over the stall current."""
    e = machine(text_of("impact-rig"))
    d = study(e).driven
    assert d is not None
    k = 24.0 / (100.0 * math.pi)
    torque = float(e.figures.hold_torque) * 0.75 / 600.0 / 1000.0
    assert d.hold_current == pytest.approx(torque / k)
    assert d.hold_power == pytest.approx((torque / k) ** 2 * 24.0 / (3.0 / k))


def test_no_voltage_no_current() -> None:
    e = machine(text_of("impact-rig"), MOTOR.replace("supply_voltage = 24\n", ""))
    d = study(e).driven
    assert d is not None
    assert (d.peak_current, d.charge, d.energy, d.hold_power) == (None, None, None, None)
    assert d.time is not None
    assert replace(d, time=None).time is None
