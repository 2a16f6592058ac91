"""The link as a beam-column: statics along it, net sections, struts and sideways buckling against closed forms."""

from __future__ import annotations

import math
from itertools import pairwise
from pathlib import Path

import numpy as np
import pytest
from anastruct import SystemElements
from scipy import linalg

from loads.checks.link import link_rules, section_stress
from loads.checks.link_sections import LinkShape, internal, net_sections, places, section_stresses
from loads.checks.stability import FREE_END, column_stress, grown, lateral_moment, overhang_factor
from tests.starters import NAMES, changed, examined, text_of

SHAPE = LinkShape(86.0, 71.0, 32.0, 8.0, 16.0, 14.0, 23.0, 2.8)


def test_nothing_is_left_at_the_crank_pin() -> None:
    """Statics: before the crank pin moment and shear are those of the pin's own force; the stop's jump is its force."""
    pull = np.array([[-900.0], [300.0], [0.0]])
    stop = np.array([[0.0], [-300.0 * 86.0 / 71.0], [0.0]])
    x = np.array([0.0, 70.9, 71.0, 86.0])
    f = internal(SHAPE, x, pull, np.zeros((3, 1)), stop)
    assert f.in_plane[0, 0] == pytest.approx(0.0, abs=1e-9)
    assert f.in_plane[3, 0] == pytest.approx(0.0, abs=1e-9)
    assert f.in_plane[2, 0] == pytest.approx(300.0 * 15.0)
    assert f.shear[1, 0] - f.shear[2, 0] == pytest.approx(stop[1, 0])
    slope = (f.in_plane[1, 0] - f.in_plane[0, 0]) / 70.9
    assert slope == pytest.approx(-f.shear[1, 0])


@pytest.mark.parametrize("x", [0.0, 5.0, 9.0, 30.0, 80.0])
def test_net_sections_by_quadrature(x: float) -> None:
    """Area, shift and second moments of the section as it is cut, summed over fine strips."""
    s = SHAPE
    cut = net_sections(s, np.array([x]))
    y, z = (np.linspace(-e / 2, e / 2, 4001)[:-1] + e / 8000 for e in (s.width, s.thickness))
    off = min((x - 0.0, s.crank_hole), (s.length - x, s.chain_hole), key=lambda p: abs(p[0]))
    hole = math.sqrt(max(off[1] ** 2 / 4 - off[0] ** 2, 0.0))
    sink = math.sqrt(max(s.sink_diameter**2 / 4 - x**2, 0.0))
    solid = (np.abs(y)[:, None] > hole) & ((np.abs(y)[:, None] > sink) | (z[None, :] < s.thickness / 2 - s.sink_depth))
    cell = s.width * s.thickness / 4000**2
    area = solid.sum() * cell
    middle = float((solid * z[None, :]).sum() * cell / area)
    assert cut.area[0] == pytest.approx(area, rel=2e-3)
    assert cut.shift[0] == pytest.approx(middle, abs=0.01)
    assert cut.inertia_z[0] == pytest.approx((solid * y[:, None] ** 2).sum() * cell, rel=2e-3)
    assert cut.inertia_y[0] == pytest.approx((solid * (z - middle)[None, :] ** 2).sum() * cell, rel=2e-3)


def test_a_whole_section_is_that_of_the_short_formula() -> None:
    x = np.array([50.0])
    f = internal(SHAPE, x, np.array([[-5e3], [2e3], [0.0]]), np.array([[3e4], [4e4], [0.0]]), np.zeros((3, 1)))
    one = section_stress(f.axial, f.in_plane, f.out_of_plane, f.torsion, 32.0, 8.0)
    assert section_stresses(SHAPE, net_sections(SHAPE, x), f) == pytest.approx(one)


def test_sections_are_cut_where_it_matters() -> None:
    x = places(SHAPE)
    for at in (0.0, 8.0, 11.5, 71.0, 79.0, 86.0):
        assert np.min(np.abs(x - at)) < 1e-9
    assert np.all(np.diff(x) > 0.0)


@pytest.mark.parametrize(("held", "k"), [(1.0, 1.0), (0.01, 1.9867)])
def test_overhanging_column_between_its_limits(held: float, k: float) -> None:
    assert overhang_factor(held) == pytest.approx(k, abs=1e-3)


@pytest.mark.parametrize("held", [0.2, 0.4, 0.7, 0.85])
def test_overhanging_column_as_an_eigenvalue(held: float) -> None:
    """Forty beam elements with their geometric stiffness, EI = L = 1, hinged at 0 and held at ``held``."""
    n, h = 40, 1.0 / 40
    bend = np.array([[12, 6 * h, -12, 6 * h], [6 * h, 4 * h * h, -6 * h, 2 * h * h], [-12, -6 * h, 12, -6 * h],
                     [6 * h, 2 * h * h, -6 * h, 4 * h * h]]) / h**3  # fmt: skip
    thrust = np.array([[36, 3 * h, -36, 3 * h], [3 * h, 4 * h * h, -3 * h, -h * h], [-36, -3 * h, 36, -3 * h],
                       [3 * h, -h * h, -3 * h, 4 * h * h]]) / (30 * h)  # fmt: skip
    k, g = np.zeros((2 * n + 2, 2 * n + 2)), np.zeros((2 * n + 2, 2 * n + 2))
    for i in range(n):
        at = slice(2 * i, 2 * i + 4)
        k[at, at] += bend
        g[at, at] += thrust
    free = [i for i in range(2 * n + 2) if i not in (0, 2 * round(held * n))]
    load = float(linalg.eigh(k[np.ix_(free, free)], g[np.ix_(free, free)], eigvals_only=True)[0])
    assert math.pi / math.sqrt(load) == pytest.approx(overhang_factor(held), rel=1e-3)


def test_sideways_buckling_of_a_strip() -> None:
    """Long strips: π/L √(E I_y G J), J = d t³/3 (Timoshenko and Gere, narrow rectangle, even moment); short ones yield."""
    modulus, d, t, length = 210e3, 60.0, 3.0, 800.0
    shear = modulus / 2.6
    closed = math.pi / length * math.sqrt(modulus * d * t**3 / 12.0 * shear * d * t**3 / 3.0)
    assert float(lateral_moment(length, d, t, 690.0, modulus)) == pytest.approx(closed, rel=0.03)
    assert float(lateral_moment(20.0, 30.0, 8.0, 355.0, modulus)) == pytest.approx(355.0 * 8.0 * 900.0 / 6.0)
    turn = 1.9 * modulus / 355.0 * t**2 / d  # where the two curves of §F11 meet, within a tenth
    low, high = (float(lateral_moment(turn * s, d, t, 355.0, modulus)) for s in (0.999, 1.001))
    assert low == pytest.approx(high, rel=0.02)


def test_bending_grows_as_a_sine_shaped_strut_does() -> None:
    """A hinged strut with a sine-shaped moment: the deflection's own moment adds N/(N_E − N) of it, by integration."""
    n_e, thrust = 1.0, 0.4
    k2 = thrust * math.pi**2  # y'' + k² y = −m sin πx on a length of 1
    amplitude = 1.0 / (math.pi**2 - k2)
    whole = 1.0 + k2 * amplitude
    assert float(grown(thrust, n_e, 1.0)) == pytest.approx(whole)
    assert float(grown(0.2, n_e, 2.0)) == pytest.approx(whole)
    assert float(grown(1.2, n_e, 1.0)) > 1e5


def test_rules_by_hand() -> None:
    """40 × 10 mm link, 120 long, stop at 90, no holes to speak of: 6 kN back, 1 kN across; E 210 GPa, f_y 355."""
    shape = LinkShape(120.0, 90.0, 40.0, 10.0, 1e-3, 1e-3)
    pull = np.array([[-6e3], [1e3], [0.0]])
    stop = np.array([[0.0], [-1e3 * 120.0 / 90.0], [0.0]])
    rules = {r.check: r for r in link_rules(shape, 355.0, 210e3, 2.0, pull, np.zeros((3, 1)), stop)}
    section = 6e3 / 400.0 + 1e3 * 30.0 * 6.0 / (10.0 * 1600.0)
    assert float(rules["axial force with bending"].demand[0]) == pytest.approx(section)
    assert float(rules["worst section"].demand[0]) == pytest.approx(section, rel=1e-3)
    assert float(rules["shear"].demand[0]) == pytest.approx(1.5 * 1e3 / 400.0, rel=1e-3)
    slender = 2.0 * 120.0 * math.sqrt(12.0) / 10.0
    column = 355.0 - 355.0**2 * slender**2 / (4.0 * math.pi**2 * 210e3)
    assert rules["strut about the thin side"].capacity == pytest.approx(column * 400.0)
    plane = overhang_factor(0.75) * 120.0 * math.sqrt(12.0) / 40.0
    growth = 1.0 / (1.0 - 2.0 * 6e3 / (math.pi**2 * 210e3 * 400.0 / plane**2))
    assert float(rules["strut with bending"].demand[0]) == pytest.approx(15.0 + growth * 11.25)
    limit = float(lateral_moment(240.0, 40.0, 10.0, 355.0, 210e3))
    assert float(rules["lateral buckling"].demand[0]) == pytest.approx(6e3 / (column * 400.0) + 30e3 / limit)
    assert "strut with the chain's offset couple" not in rules


@pytest.mark.parametrize("name", NAMES)
def test_a_bill_shows_the_link_from_pin_to_pin(name: str, tmp_path: Path) -> None:
    e = examined(tmp_path, text_of(name))
    rows = {(r.site, r.check): r for r in e.checks if r.part == "swing_link"}
    for site in ("crank_pin_eye", "chain_pin_eye"):
        assert "from the crank pin" in rows[site, "net section"].method
        assert "K_t" in rows[site, "net section"].note
    assert rows["between the pins", "worst section"].demand >= rows["crank_pin_eye", "net section"].demand
    assert ("between the pins", "lateral buckling") in rows
    assert FREE_END == 2.0
    assert float(column_stress(0.0, 355.0, 210e3)) == 355.0


def test_a_thin_link_in_a_single_stack_gives_way_sideways(tmp_path: Path) -> None:
    kept = {"mechanism__stack": '"single"', "link__width": '"40 mm"'}
    thin = examined(tmp_path, changed("soil-tamper", **kept, link__thickness='"3 mm"'))
    stout = examined(tmp_path, changed("soil-tamper", **kept, link__thickness='"12 mm"'))
    assert ("swing_link", "lateral buckling") in {(c.part, c.check) for c in thin.falls_short}
    assert not {c.check for c in stout.falls_short if c.part == "swing_link"}


def test_sections_against_a_frame_solver() -> None:
    """The seated link as a frame: hinged at the crank pin, on a roller at the stop, pushed and bent at the chain pin."""
    frame = SystemElements()
    stations = [0.0, 30.0, 60.0, 71.0, 80.0, 86.0]
    for start, end in pairwise(stations):
        frame.add_element(location=[[start, 0.0], [end, 0.0]])
    frame.add_support_hinged(node_id=1)
    frame.add_support_roll(node_id=4)
    frame.point_load(node_id=6, Fx=-5000.0, Fy=1500.0)
    frame.solve()
    push = -1500.0 * 86.0 / 71.0
    pull, stop = np.array([[-5000.0], [1500.0], [0.0]]), np.array([[0.0], [push], [0.0]])
    f = internal(SHAPE, np.array(stations), pull, np.zeros((3, 1)), stop)
    for i in range(5):
        found = frame.get_element_results(element_id=i + 1)
        ends = sorted(abs(float(found[key])) for key in ("Mmin", "Mmax"))
        ours = sorted(abs(float(x)) for x in f.in_plane[i : i + 2, 0])
        assert ends == pytest.approx(ours, abs=1e-3 * 1500.0 * 15.0)
        assert float(found["Nmin"]) == pytest.approx(float(f.axial[i, 0]), rel=1e-6)
        assert max(abs(float(found["Qmin"])), abs(float(found["Qmax"]))) == pytest.approx(
            abs(float(f.shear[i, 0])), rel=1e-6
        )
