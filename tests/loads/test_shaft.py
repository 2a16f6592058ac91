"""The main shaft against a frame solver, the key against a worked example; thin shafts and short keys are caught."""

from __future__ import annotations

import math
from pathlib import Path

import numpy as np
import pytest
from anastruct import SystemElements

from loads.checks import shaft
from parts.sizes import LinkSizes
from tests.loads.test_press import metal
from tests.starters import changed, examined, text_of


@pytest.mark.parametrize(
    ("force", "couple", "a", "b"), [(1e3, 0.0, 30.0, 90.0), (8e3, 2e5, 45.0, 60.0), (0.0, 5e4, 20.0, 70.0)]
)
def test_overhung_beam_against_a_frame_solver(force: float, couple: float, a: float, b: float) -> None:
    d, modulus = 30.0, 210e3
    frame = SystemElements(EA=1e12, EI=modulus * math.pi * d**4 / 64)
    frame.add_element([[0, 0], [b, 0]])
    frame.add_element([[b, 0], [a + b, 0]])
    frame.add_support_hinged(1)
    frame.add_support_roll(2)
    if force:
        frame.point_load(3, Fy=-force)
    if couple:
        frame.moment_load(3, Ty=-couple)
    frame.solve()
    end, near, far = (frame.get_node_results_system(i) for i in (3, 2, 1))
    assert float(shaft.lean(force, couple, d, a, b, modulus)) == pytest.approx(abs(end["phi_z"]), rel=1e-6)
    assert float(shaft.sag(force, couple, d, a, b, modulus)) == pytest.approx(abs(end["uy"]), rel=1e-6)
    # the couple turns the disc the way in which the force pulls: M = (0, arm F) for a force along x
    load = shaft.shaft_load(np.array([[force], [0.0], [0.0]]), np.array([[0.0], [couple], [0.0]]), a, b)
    assert abs(float(load.first[0, 0])) == pytest.approx(abs(near["Fy"]), rel=1e-6)
    assert abs(float(load.second[0, 0])) == pytest.approx(abs(far["Fy"]), rel=1e-6)
    moments = frame.get_element_results(1)
    assert float(load.bending[0]) == pytest.approx(max(abs(moments["Mmin"]), abs(moments["Mmax"])), rel=1e-6)


@pytest.mark.parametrize("spring", [1e5, 1e7, 1e10])
def test_beam_on_rotational_springs_against_a_frame_solver(spring: float) -> None:
    """Half of it: the middle bears no moment, and a short beam with its far end held is the rotational spring, 4 E I/L."""
    span, ei = 55.0, 1.1e9
    frame = SystemElements(EA=1e12, EI=ei)
    frame.add_element([[-10, 0], [0, 0]], EI=spring * 10 / 4)
    frame.add_element([[0, 0], [span / 2, 0]])
    frame.add_support_fixed(1)
    frame.add_support_roll(2)
    frame.point_load(3, Fy=-1e3)
    frame.solve()
    half = abs(frame.get_node_results_system(3)["uy"])
    assert shaft.pair_stiffness(spring, ei, span) == pytest.approx(1e3 / (2 * half), rel=1e-5)


def test_stress_is_that_of_the_principal_stresses() -> None:
    m, t, d = 3.1e5, 4.7e5, 32.0
    sigma, tau = 32 * m / (math.pi * d**3), 16 * t / (math.pi * d**3)
    one, two = np.linalg.eigvalsh(np.array([[sigma, tau], [tau, 0.0]]))
    assert float(shaft.shaft_stress(m, t, d)) == pytest.approx(math.sqrt(one**2 - one * two + two**2))


def test_key_of_a_worked_example() -> None:
    """Shigley's key example (from memory): shaft 1 7/16 in, 40 hp at 600 rev/min, key 3/8 in square of 65 kpsi, n 2.8:
    length 1.16 in by shear, 1.34 in by crushing."""
    inch, pound = 25.4, 4.4482216
    torque = np.array(63025 * 40 / 600 * pound * inch)
    d, w, ksi = 1.4375 * inch, 0.375 * inch, 6.894757
    by_shear = 2.8 * float(shaft.key_shear_stress(torque, d, w, inch)) / (0.577 * 65 * ksi)
    by_side = 2.8 * float(shaft.key_pressure(torque, d, w / 2, inch)) / (65 * ksi)
    assert by_shear == pytest.approx(1.16, abs=0.01)
    assert by_side == pytest.approx(1.34, abs=0.01)


def test_tilt_of_a_link_by_hand() -> None:
    link = LinkSizes(28.0, 8.0, 0.0, 0.0, metal(210e3))
    bending = 210e3 * 28 * 8**3 / 12 / 86
    twisting = 210e3 / 2.6 * 28 * 8**3 / 3 * (1 - 0.63 * 8 / 28) / 86
    assert shaft.link_tilt_stiffness(link, 86.0) == pytest.approx(max(bending, twisting))


def test_force_between_discs_out_of_step() -> None:
    arm = np.array([50.0, 100.0])
    assert shaft.phase_force(2e3, arm, 0.01, 0.6) == pytest.approx([0.0, 2e3 * 0.4])
    assert shaft.one_side(np.array([10.0]), np.array([3.0])) == pytest.approx([8.0])


WEAK = {
    "thin shaft": (
        "impact-rig",
        {"shaft__diameter": '"20 mm"'},
        {("main_shaft", "bending with torsion"), ("main_shaft", "lean of the disc")},
    ),
    "long overhang": (
        "impact-rig",
        {"shaft__diameter": '"40 mm"', "shaft__overhang": '"150 mm"'},
        {("main_shaft", "lean of the disc")},
    ),
    "short key": (
        "impact-rig",
        {"shaft__drive": '"key"', "shaft__key_length": '"8 mm"', "shaft__diameter": '"40 mm"'},
        {("main_shaft", "key pressure")},
    ),
    "soft shaft": (
        "impact-rig",
        {"shaft__material": '"S235JR"', "shaft__diameter": '"35 mm"'},
        {("main_shaft", "bending with torsion")},
    ),
    "careless phase": ("impact-rig", {"shaft__phase_tolerance": '"3 deg"'}, {("main_shaft", "discs out of step")}),
}


@pytest.mark.parametrize("name", WEAK)
def test_a_weak_shaft_is_caught(name: str, tmp_path: Path) -> None:
    starter, changes, wanted = WEAK[name]
    e = examined(tmp_path, changed(starter, **changes))
    missed = {(c.part, c.check) for c in e.falls_short}
    assert wanted <= missed
    assert {part for part, _ in missed} <= {"main_shaft", "main_bearing"}


@pytest.mark.parametrize("drive", ["key", "flange"])
@pytest.mark.parametrize("name", ["impact-rig", "seed-thrower", "soil-tamper"])
def test_a_shaft_left_open_holds(name: str, drive: str, tmp_path: Path) -> None:
    e = examined(tmp_path, changed(name, shaft__drive=f'"{drive}"'))
    assert e.holds, [(c.part, c.site, c.check) for c in e.falls_short]
    rows = {c.check for c in e.checks if c.part == "main_shaft"}
    assert ("key shear" in rows) == (drive == "key")
    assert ("discs out of step" in rows) == (len(e.stack.sides) == 2)


def test_everything_assumed_of_the_shaft_is_listed(tmp_path: Path) -> None:
    e = examined(tmp_path, text_of("impact-rig"))
    keys = {a.key for a in e.assumed}
    wanted = {"diameter", "overhang", "bearing_spacing", "material", "drive", "phase_tolerance"}
    assert {f"shaft.{x}" for x in wanted} <= keys
    radius = next(a.value for a in e.assumed if a.key == "friction.bearing_radius")
    assert e.sizes.running is not None
    assert radius == e.sizes.running.shaft.diameter / 2
