"""Strength against repeated stress, against worked numbers.

Shigley: numbers of the 9th edition (tables, examples 6-6, 6-7 and 6-16) and of its publisher's solutions (problems 6-1,
6-3, 6-15) were read in print; what is from memory says so.
"""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from loads.fatigue.data import endurance, surface
from loads.fatigue.strength import (
    SNLine,
    damage,
    goodman_factor,
    growth_to_failure,
    neuber_length,
    notch_factor,
    rectangle_diameter,
    reliability_factor,
    reversed_stress,
    size_factor,
    strength_fraction,
    surface_factor,
)
from parts.design import Material

KSI = 6.894757


def line(s_ut: float, f: float, s_e: float, knee: float = 1e6, endless: bool = True) -> SNLine:
    return SNLine(*(np.array([[v]]) for v in (s_ut, f, s_e, knee, float(endless))))


def steel(kind: str, s_ut: float, modulus: float = 210e3) -> Material:
    return Material("x", kind, modulus, 0.3, 7850.0, ((1e9, 0.8 * s_ut),), ((1e9, s_ut),), "a test", True)


def test_surface_factor_of_table_6_2() -> None:
    """Example 6-16 has 4.45 × 520^−0.265 = 0.848 with that chapter's mean a; table 6-2 for design has a = 4.51."""
    assert float(surface_factor(520.0, 4.45, -0.265)) == pytest.approx(0.848, abs=1e-3)
    assert surface("machined") == (4.51, -0.265)
    assert surface("ground") == (1.58, -0.085)
    assert surface("hot-rolled") == (57.7, -0.718)
    assert surface("as-cut") == (272.0, -0.995)
    assert float(surface_factor(100.0, *surface("machined"))) == 1.0
    # the same rows in kpsi
    for name, a in (("ground", 1.34), ("machined", 2.70), ("hot-rolled", 14.4), ("as-cut", 39.9)):
        assert float(surface_factor(100 * KSI, *surface(name))) == pytest.approx(a * 100 ** surface(name)[1], rel=0.01)


def test_size_factor() -> None:
    """Problem 6-1: d = 10 mm gives 1.24 × 10^−0.107 = 0.969."""
    assert float(size_factor(10.0)) == pytest.approx(0.969, abs=1e-3)
    assert float(size_factor(1.0)) == pytest.approx(1.0, abs=0.12)
    assert float(size_factor(51.0)) == pytest.approx(float(size_factor(51.001)), rel=0.01)
    assert rectangle_diameter(40.0, 10.0) == pytest.approx(16.16)


@pytest.mark.parametrize(
    ("reliability", "k_e"), [(0.5, 1.0), (0.9, 0.897), (0.95, 0.868), (0.99, 0.814), (0.999, 0.753), (0.9999, 0.702)]
)
def test_reliability_factor_of_table_6_5(reliability: float, k_e: float) -> None:
    assert reliability_factor(reliability) == pytest.approx(k_e, abs=1e-3)


@pytest.mark.parametrize("value", [0.3, 1.0])
def test_reliability_outside_its_range(value: float) -> None:
    with pytest.raises(ValueError, match="reliability"):
        reliability_factor(value)


def test_strength_fraction_of_figure_6_18() -> None:
    """As read in examples and solutions: 0.845 at 690 MPa, 0.82 at 120 kpsi, 0.9 at 551 MPa and below, 0.77 at 1600 MPa."""
    for s_ut, f in ((690.0, 0.845), (120 * KSI, 0.82), (1600.0, 0.77)):
        assert float(strength_fraction(s_ut)) == pytest.approx(f, abs=0.012)
    assert float(strength_fraction(300.0)) == 0.9


def test_notch_sensitivity_of_example_6_6() -> None:
    """S_ut 690 MPa, r 3 mm, K_t 1.65: √a = 0.313 √mm, K_f = 1.55."""
    assert float(neuber_length(690.0)) == pytest.approx(0.313, abs=2e-3)
    assert float(notch_factor(1.65, 3.0, 690.0)) == pytest.approx(1.55, abs=5e-3)


def test_sn_line_of_problem_6_3() -> None:
    """S_ut 120 kpsi, f 0.82, S_e 60 kpsi, 70 kpsi reversed: a = 161.4 kpsi, b = −0.0716, N = 117 000."""
    sn = line(120 * KSI, 0.82, 60 * KSI)
    assert float(sn.factor[0, 0]) / KSI == pytest.approx(161.4, abs=0.05)
    assert float(sn.exponent[0, 0]) == pytest.approx(-0.0716, abs=5e-5)
    # the book rounds b before it takes the root
    assert float(sn.cycles(np.array([[70 * KSI]]))[0, 0]) == pytest.approx(117e3, rel=0.01)


def test_sn_line_of_problem_6_15() -> None:
    """S_ut 551 MPa, f 0.9, S_e 276 MPa, 358.5 MPa reversed: a = 891.0 MPa, b = −0.084828, N = 45 800."""
    sn = line(551.0, 0.9, 276.0)
    assert float(sn.factor[0, 0]) == pytest.approx(891.0, abs=0.05)
    assert float(sn.exponent[0, 0]) == pytest.approx(-0.084828, abs=1e-6)
    assert float(sn.cycles(np.array([[358.5]]))[0, 0]) == pytest.approx(45.8e3, rel=2e-3)


def test_sn_line_of_example_6_7() -> None:
    """S_ut 690, f 0.845, S_e 280, 403 MPa reversed; N = 32.3 × 10³ is from memory."""
    sn = line(690.0, 0.845, 280.0)
    assert float(sn.cycles(np.array([[403.0]]))[0, 0]) == pytest.approx(32.3e3, rel=0.01)


@given(st.floats(300, 1500), st.floats(0.75, 0.9), st.floats(0.1, 0.5), st.floats(1, 7.5))
def test_strength_and_cycles_undo_each_other(s_ut: float, f: float, share: float, decades: float) -> None:
    sn = line(s_ut, f, share * s_ut, 1e8)
    assert float(sn.cycles(sn.strength(10**decades))[0, 0]) == pytest.approx(10**decades, rel=1e-6)


def test_strength_at_its_ends() -> None:
    sn = line(700.0, 0.85, 250.0)
    assert float(sn.strength(1.0)[0, 0]) == pytest.approx(700.0)
    assert float(sn.strength(1e3)[0, 0]) == pytest.approx(0.85 * 700.0)
    assert float(sn.strength(1e6)[0, 0]) == pytest.approx(250.0)
    assert float(sn.strength(1e8)[0, 0]) == pytest.approx(250.0)
    assert float(line(700.0, 0.85, 250.0, endless=False).strength(1e8)[0, 0]) < 200.0


def test_goodman_by_hand() -> None:
    """σ_a 100, σ_m 120, S_e 200, S_ut 600 MPa: 1/n = 0.5 + 0.2; σ_rev = 100/0.8. A mean in compression gives nothing."""
    amplitude, mean = np.array([100.0, 100.0]), np.array([120.0, -120.0])
    assert goodman_factor(amplitude, mean, np.array(200.0), 600.0) == pytest.approx([1.0 / 0.7, 2.0])
    assert reversed_stress(amplitude, mean, 600.0) == pytest.approx([125.0, 100.0])
    assert np.isinf(reversed_stress(np.array([1.0]), np.array([600.0]), 600.0))
    assert np.isinf(goodman_factor(np.array([0.0]), np.array([0.0]), np.array(200.0), 600.0))


def test_miner_by_hand() -> None:
    """Two levels on one line: Σ n/N of their own lives; nothing while all stay below S_e, all count when one does not."""
    sn = line(600.0, 0.9, 200.0)
    lives = sn.cycles(np.array([[300.0, 250.0]]))[0]
    amplitude, mean, count = np.array([[300.0, 250.0]]), np.zeros((1, 2)), np.array([[1.0, 3.0]])
    assert damage(amplitude, mean, count, sn) == pytest.approx([1.0 / lives[0] + 3.0 / lives[1]])
    assert damage(np.array([[199.0, 150.0]]), mean, count, sn) == pytest.approx([0.0])
    low = sn.cycles(np.array([[150.0]]))[0, 0]
    assert damage(np.array([[300.0, 150.0]]), mean, count, sn) == pytest.approx([1.0 / lives[0] + 3.0 / low])
    # a cycle that counts for nothing is nothing, however large
    assert damage(np.array([[100.0, 9e9]]), mean, np.array([[1.0, 0.0]]), sn) == pytest.approx([0.0])


@given(st.floats(20, 300), st.floats(-200, 200), st.floats(1, 1e7))
def test_growth_of_one_cycle_is_goodman_with_s_f(amplitude: float, mean: float, shots: float) -> None:
    """One cycle a shot: the growth to failure is Goodman's factor with the strength at so many cycles."""
    sn = line(800.0, 0.83, 260.0)
    a, m, n = np.array([[amplitude]]), np.array([[mean]]), np.ones((1, 1))
    wanted = goodman_factor(a, m, sn.strength(shots), sn.s_ut)[:, 0]
    found = growth_to_failure(a, m, n, sn, shots, wanted * 0.5, wanted * 2.0)
    assert found == pytest.approx(wanted, rel=1e-5)


def test_endurance_by_family() -> None:
    """S_e' = 0.5 S_ut, 700 MPa from 1400 MPa on (problems 6-2 and 6-4); a stiff metal of one's own is a steel."""
    for kind in ("structural steel", "through-hardening bar", "own"):
        metal = endurance(steel(kind, 1000.0))
        assert metal.name == "steel"
        assert metal.limit(1000.0) == 500.0
        assert metal.limit(1600.0) == 700.0
    soft = endurance(steel("own", 400.0, 70e3))
    assert not soft.endless
    assert not endurance(steel("aluminium", 300.0, 70e3)).endless
    assert math.isclose(endurance(steel("aluminium", 300.0, 70e3)).limit(300.0), 120.0)
