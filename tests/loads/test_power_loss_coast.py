"""Coasting after a loss of power: against the integrated equation of motion, and the inertia that it goes by."""

from __future__ import annotations

import math
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from loads.cycle import Cycle, cycle
from loads.inertia import Inertia
from loads.linkage import Linkage, State, state
from loads.power_loss.bands import RUNS_ON, UNWINDS
from loads.power_loss.coast import FIRES, TURNS_BACK, WORK, make_path
from loads.power_loss.study import LOADED
from loads.spring_law import spring_energy
from tests.loads.machines import TABLE
from tests.loads.power_losses import DEG, ROD, bands_of, far, outcome_of, rubbing, study_of
from tests.starters import examined, text_of


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
    last = next(b for b in reversed(bands_of(m)) if b.fate == UNWINDS)
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
