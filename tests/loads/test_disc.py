"""The disc: bolt group against a least-squares solution, bolts against printed resistances, sections by sampling."""

from __future__ import annotations

import math
from pathlib import Path

import numpy as np
import pytest

from loads.checks import disc
from parts.hardware import cap_screw
from tests.starters import changed, examined


def test_bolt_group_is_the_elastic_one() -> None:
    """Of all bolt forces that balance a load the elastic group has the least sum of squares."""
    rng = np.random.default_rng(3)
    for k in (3, 4, 6, 8):
        radius, phase = 40.0, 0.3
        a = phase + 2 * math.pi * np.arange(k) / k
        x, y = radius * np.cos(a), radius * np.sin(a)
        force, moment = rng.normal(size=3) * 1e3, rng.normal(size=3) * 1e5
        force[2] = 0.0
        one, none = np.ones(k), np.zeros(k)
        plane = np.block([[one, none], [none, one], [-y, x]])
        v = np.linalg.lstsq(plane, np.array([force[0], force[1], moment[2]]), rcond=None)[0]
        n = np.linalg.lstsq(np.stack([one, y, -x]), np.array([0.0, moment[0], moment[1]]), rcond=None)[0]
        shear, tension = disc.hub_bolt_forces(force[:, None], moment[:, None], radius, a)
        assert shear[:, 0] == pytest.approx(np.hypot(v[:k], v[k:]))
        assert tension[:, 0] == pytest.approx(np.maximum(n, 0.0))


def test_bolts_against_printed_resistances() -> None:
    """M20 class 8.8 with γM2 = 1.25 as tables of resistances print it: shear 94.1 kN, tension 141 kN."""
    a_s = cap_screw("M20").stress_area
    assert 1.0 / float(disc.bolt_rupture_use(0.0, 1.0, a_s, 800.0)) / 1.25e3 == pytest.approx(94.1, abs=0.05)
    assert 1.0 / float(disc.bolt_rupture_use(1.0, 0.0, a_s, 800.0)) / 1.25e3 == pytest.approx(141.1, abs=0.05)
    both = float(disc.bolt_rupture_use(141.12e3 * 1.25 * 0.7, 94.08e3 * 1.25 * 0.5, a_s, 800.0))
    assert both == pytest.approx(0.5 + 0.7 / 1.4)
    # e 40 mm in a 22 mm hole, plate 10 mm of 410 MPa: α_b = 0.606, k_1 = 2.5, by hand
    assert disc.bolt_bearing(10.0, 20.0, 22.0, 40.0, 410.0, 800.0) == pytest.approx(2.5 * 40 / 66 * 410 * 200)
    assert disc.bolt_bearing(10.0, 20.0, 22.0, 10.0, 410.0, 800.0) == 0.0


def test_bolt_yield_is_distortion_energy() -> None:
    a_s, f_y = 58.0, 640.0
    stress = np.array([[200.0, 150.0, 0.0], [150.0, 0.0, 0.0], [0.0, 0.0, 0.0]])
    off = stress - np.eye(3) * np.trace(stress) / 3
    assert float(disc.bolt_yield_use(200 * a_s, 150 * a_s, a_s, f_y)) == pytest.approx(
        math.sqrt(1.5 * float(np.sum(off**2))) / f_y
    )


def test_net_chords_by_sampling() -> None:
    holes = np.array([[10.0, 0.0, 20.0, 12.0], [12.0, 30.0, 8.0, 6.0]])
    at, rim, t = np.array([5.0, 10.0, 14.0, 30.0]), 120.0, 12.0
    y = np.linspace(-60, 60, 240_001)
    for x, net in zip(at, disc.net_chords(at, rim, t, holes), strict=True):
        depth = np.where(np.hypot(x, y) <= rim / 2, t, 0.0)
        for hx, hy, d, h in holes:
            depth = depth - np.where(np.hypot(x - hx, y - hy) <= d / 2, h, 0.0)
        assert net == pytest.approx(float(np.sum(depth) * (y[1] - y[0])) / t, abs=0.01)


def test_chord_stress_by_hand() -> None:
    """A solid disc, force across the radius: the chord at the bore bears F (r − b/2) in its plane and nothing else."""
    force = np.array([[0.0], [9e3], [0.0]])
    none = np.zeros((3, 1))
    found = disc.chord_stress(force, none, (50.0, 0.0), 10.0, 20.0, 160.0, 12.0, np.zeros((1, 4)))
    chords = [2 * math.sqrt(80**2 - x**2) for x in np.linspace(10, 45, disc.STATIONS)]
    by_hand = [6 * 9e3 * (50 - x) / (12 * w**2) for x, w in zip(np.linspace(10, 45, 7), chords, strict=True)]
    assert float(found[0]) == pytest.approx(max(by_hand))


WEAK = {
    "thin bolts": ("impact-rig", {"disc__bolt_hole": '"4.5 mm"'}, {("crank_disc", "hub bolt yield")}),
    "few bolts": (
        "impact-rig",
        {"disc__bolt_hole": '"6.6 mm"', "disc__bolt_count": "3"},
        {("crank_disc", "hub bolt rupture")},
    ),
}


@pytest.mark.parametrize("name", WEAK)
def test_weak_bolts_are_caught(name: str, tmp_path: Path) -> None:
    starter, changes, wanted = WEAK[name]
    e = examined(tmp_path, changed(starter, **changes))
    missed = {(c.part, c.check) for c in e.falls_short}
    assert wanted <= missed
    assert all(check.startswith("hub bolt") for _, check in missed)


def test_the_bolt_that_the_proportion_takes_is_the_smallest_that_holds(tmp_path: Path) -> None:
    e = examined(tmp_path, changed("impact-rig"))
    use = [c for c in e.checks if c.check.startswith("hub bolt")]
    assert all(c.holds for c in use)
