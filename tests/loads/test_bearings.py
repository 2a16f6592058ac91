"""Bearings, sheave, contact in the eyes and the blow of the catch."""

from __future__ import annotations

import math
from pathlib import Path

import numpy as np
import pytest
from anastruct import SystemElements

from loads.checks import bearings, pins, stop
from loads.far_ends.chain import least_running_diameter
from loads.practice import key_for
from tests.loads.test_press import metal
from tests.parts.designs import chain_of
from tests.starters import changed, examined, text_of


def test_static_load_of_iso_76() -> None:
    assert float(bearings.equivalent_static_load(np.array(10e3))) == 10e3
    assert float(bearings.equivalent_static_load(np.array(10e3), 12e3)) == pytest.approx(0.6 * 10e3 + 0.5 * 12e3)


def test_bush_by_hand() -> None:
    p = bearings.bush_pressure(np.array(9e3), 30.0, 20.0)
    assert float(p) == pytest.approx(15.0)
    # 60 rev/min on 30 mm is 0.0942 m/s
    assert float(bearings.pressure_times_speed(p, 2 * math.pi, 30.0)) == pytest.approx(15.0 * 0.09425, rel=1e-3)


def test_keys_as_printed() -> None:
    """DIN 6885-1: shaft 40 mm, 12 × 8, 5 mm deep; 50 mm, 14 × 9, 5.5; 60 mm, 18 × 11, 7."""
    for d, *wanted in ((40, 12, 8, 5), (50, 14, 9, 5.5), (60, 18, 11, 7)):
        key = key_for(d)
        assert [key.width, key.height, key.seat] == wanted


def test_contact_in_an_eye_is_hertz() -> None:
    """0.591 sqrt(E F (d_0 − d)/(d² t)) is line contact of a pin in a hole of nearly its size: 1/R = 2/d − 2/d_0."""
    steel, d, d_0, t, force = metal(210e3), 50.0, 50.6, 30.0, 250e3
    radius = 1 / (2 / d - 2 / d_0)
    hertz = float(stop.line_contact_pressure(force, t, radius, stop.contact_modulus(steel, steel)))
    found = float(pins.eye_contact_stress(np.array(force), 210e3, d, d_0, t))
    assert found == pytest.approx(hertz * math.sqrt(d_0 / d), rel=1e-3)
    assert pins.eye_contact_limit(355.0) == 887.5


def test_sheave_of_a_leaf_and_of_a_roller_chain(tmp_path: Path) -> None:
    leaf = chain_of(examined(tmp_path, text_of("impact-rig")).design)
    roller = chain_of(examined(tmp_path, text_of("soil-tamper")).design)
    assert least_running_diameter(leaf) == 5 * leaf.pitch
    assert least_running_diameter(roller) == pytest.approx(roller.pitch * 2.924, rel=1e-3)


def test_sheave_pin_carries_both_legs(tmp_path: Path) -> None:
    e = examined(tmp_path, text_of("impact-rig"))
    s = e.past.state
    both = np.hypot(s.sheave_x, s.sheave_y) * e.design.targets.shock_factor
    row = next(c for c in e.checks if (c.part, c.check) == ("sheave_pin", "pin shear"))
    assert row.demand == pytest.approx(float(np.max(both)) / 2)


WEAK = {
    "small sheave": ({"sheave__pitch_radius": '"60 mm"'}, {("sheave", "chain bends over the sheave")}),
    "thin sheave pin": (
        {"sheave__pin_diameter": '"14 mm"'},
        {("sheave_pin", "pin bending"), ("sheave_bearing", "bush pressure")},
    ),
    "small bearing": ({"bearings__main": '{ static_rating = "12 kN" }'}, {("main_bearing", "static safety")}),
    "narrow bush": ({"bearings__main": '{ width = "8 mm", diameter = "35 mm" }'}, {("main_bearing", "bush pressure")}),
    "small sheave bearing": (
        {"bearings__sheave": '{ kind = "rolling", static_rating = "20 kN" }'},
        {("sheave_bearing", "static safety")},
    ),
}


@pytest.mark.parametrize("name", WEAK)
def test_a_weak_bearing_or_sheave_is_caught(name: str, tmp_path: Path) -> None:
    changes, wanted = WEAK[name]
    e = examined(tmp_path, changed("impact-rig", **changes))
    missed = {(c.part, c.check) for c in e.falls_short}
    assert wanted <= missed
    assert {part for part, _ in missed} <= {part for part, _ in wanted} | {"main_shaft"}


def test_rolling_bearings_left_open_say_what_to_buy(tmp_path: Path) -> None:
    text = changed("impact-rig", bearings__main='{ kind = "rolling" }', bearings__sheave='{ kind = "rolling" }')
    e = examined(tmp_path, text)
    assert e.holds
    rating = next(a for a in e.assumed if a.key == "bearings.main.static_rating")
    worst = max(c.demand for c in e.checks if (c.part, c.check) == ("main_bearing", "static safety"))
    assert isinstance(rating.value, float)
    assert 1.5 * worst <= rating.value < 1.5 * worst + 100


def test_speed_brings_pv_and_the_blow(tmp_path: Path) -> None:
    slow = examined(tmp_path, changed("impact-rig", moving__disc_speed='"6 rpm"'))
    rows = {(c.part, c.check): c for c in slow.checks}
    assert slow.holds, [(c.part, c.check) for c in slow.falls_short]
    assert {("main_bearing", "bush pv"), ("sheave_bearing", "bush pv"), ("stop", "blow of the catch")} <= set(rows)
    fast = examined(tmp_path, changed("impact-rig", moving__disc_speed='"1500 rpm"'))
    assert {("stop", "blow of the catch"), ("main_bearing", "bush pv")} <= {(c.part, c.check) for c in fast.falls_short}
    silent = examined(tmp_path, text_of("impact-rig"))
    assert not {"bush pv", "blow of the catch"} & {c.check for c in silent.checks}
    assert any("not covered" in c.note for c in silent.checks if (c.part, c.check) == ("stop", "contact"))


def test_inertia_of_a_link_by_sampling() -> None:
    length, width, thickness = 86.0, 28.0, 8.0
    x, y = np.meshgrid(np.linspace(-20, 110, 1301), np.linspace(-20, 20, 401))
    inside = ((x >= 0) & (x <= length) & (abs(y) <= width / 2)) | (np.hypot(x, y) <= width / 2)
    inside |= np.hypot(x - length, y) <= width / 2
    cell = (130 / 1300) * (40 / 400)
    wanted = float(np.sum(np.where(inside, x**2 + y**2, 0.0))) * cell * thickness * 7850e-9
    assert stop.swing_inertia(length, width, thickness, 7850.0, 0.0) == pytest.approx(wanted, rel=5e-3)
    added = stop.swing_inertia(length, width, thickness, 7850.0, 0.1) - stop.swing_inertia(
        length, width, thickness, 7850.0, 0
    )
    assert added == pytest.approx(0.1 * length**2)


def test_stop_as_a_cantilever_against_a_frame_solver() -> None:
    arm, d, steel = 9.0, 18.0, metal(210e3)
    inertia, area = math.pi * d**4 / 64, math.pi * d**2 / 4
    frame = SystemElements(EA=1e12, EI=210e3 * inertia)
    frame.add_element([[0, 0], [arm, 0]])
    frame.add_support_fixed(1)
    frame.point_load(2, Fy=-1e3)
    frame.solve()
    bent = abs(frame.get_node_results_system(2)["uy"])
    sheared = 1e3 * arm / (0.9 * 210e3 / 2.6 * area)
    assert stop.root_stiffness(arm, inertia, area, 0.9, steel) == pytest.approx(1e3 / (bent + sheared), rel=1e-6)


def test_blow_gives_the_stop_the_links_energy() -> None:
    inertia, speed, k = 4000.0, 2.0, 5e5
    force = stop.blow_force(inertia, speed, k)
    assert force**2 / (2 * k) == pytest.approx(0.5 * inertia * speed**2 / 1000)
