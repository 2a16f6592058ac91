"""The checks' formulas against published worked numbers and hand calculations."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import integrate

from loads.checks import eyes, pins
from loads.checks.link import column_stress, rectangle_torsion_stress, section_stress
from loads.checks.stop import line_contact_pressure, line_contact_yield_force

INCH, KSI, KIP = 25.4, 6.894757, 4448.2216


def test_aisc_design_example_d7() -> None:
    """AISC Design Examples, Example D.7: A36 plate, w 4.25 in, t 0.5 in, pin 1.00 in, a 2.25 in, hole 1.03 in."""
    f_y, f_u, t, d, a = 36 * KSI, 58 * KSI, 0.5 * INCH, 1.0 * INCH, 2.25 * INCH
    b = (4.25 - 1.03) / 2 * INCH
    b_e = eyes.effective_width(t, b)
    # the metric form adds 16 mm where the US form adds 0.63 in (16.002 mm); here the width beside the hole governs
    assert b_e / INCH == pytest.approx(1.61, abs=5e-3)
    assert eyes.tensile_rupture(t, b_e, f_u) / KIP == pytest.approx(93.4, abs=0.05)
    assert eyes.shear_rupture(t, a, d, f_u) / KIP == pytest.approx(95.7, abs=0.05)
    assert eyes.static_bearing(t, d, f_y) / KIP == pytest.approx(32.4, abs=0.05)
    assert eyes.gross_yield(t, 4.25 * INCH, f_y) / KIP == pytest.approx(76.5, abs=0.05)


def test_pin_of_en_1993_1_8_by_hand() -> None:
    """Pin 60 mm, f_up 600, f_yp 400 MPa; F 300 kN; a 15, b 30, c 2 mm. Worked by hand from table 3.10 and figure 3.11."""
    assert pins.pin_shear_capacity(60.0, 600.0) == pytest.approx(0.6 * 2827.433 * 600.0, rel=1e-6)
    assert pins.section_modulus(60.0) == pytest.approx(21205.75, rel=1e-6)
    assert pins.pin_bending_capacity(60.0, 400.0) == pytest.approx(1.5 * 21205.75 * 400.0, rel=1e-6)
    assert pins.replaceable_pin_bending_capacity(60.0, 400.0) == pytest.approx(0.8 * 21205.75 * 400.0, rel=1e-6)
    assert pins.double_shear_moment(np.array(300e3), 15.0, 30.0, 2.0) == pytest.approx(300e3 / 8 * (30 + 8 + 30))
    assert eyes.turning_bearing(30.0, 60.0, 355.0) == pytest.approx(0.6 * 30 * 60 * 355)
    assert eyes.bearing(30.0, 60.0, 355.0) == pytest.approx(1.5 * 30 * 60 * 355)


def test_double_shear_moment_is_the_beam_with_spread_loads() -> None:
    """Figure 3.11 is the mid-span moment of a pin whose plates press evenly over their thickness."""
    a, b, c, force = 12.0, 37.0, 1.5, 40e3
    press_inner = integrate.quad(lambda x: force / b * x, 0, b / 2)[0]
    outer_arm = b / 2 + c + a / 2
    assert float(pins.double_shear_moment(np.array(force), a, b, c)) == pytest.approx(
        force / 2 * outer_arm - press_inner
    )


def test_shear_with_bending_is_the_factor_on_all_loads() -> None:
    factor = float(pins.shear_and_bending_factor(np.array(0.3), np.array(0.4)))
    assert factor == pytest.approx(2.0)
    assert (0.3 * factor) ** 2 + (0.4 * factor) ** 2 == pytest.approx(1.0)


def test_column_formulas_meet_where_they_should() -> None:
    """Euler and Johnson meet at half the yield strength with the same slope (Shigley, columns with central loading)."""
    f_y, modulus = 355.0, 210e3
    turn = math.sqrt(2 * math.pi**2 * modulus / f_y)
    low, high = float(column_stress(turn * (1 - 1e-9), f_y, modulus)), float(column_stress(turn, f_y, modulus))
    assert low == pytest.approx(f_y / 2, rel=1e-6)
    assert high == pytest.approx(f_y / 2, rel=1e-6)
    h = 1e-4
    slopes = [
        float(column_stress(turn + s * h, f_y, modulus) - column_stress(turn, f_y, modulus)) / (s * h) for s in (-1, 1)
    ]
    assert slopes[0] == pytest.approx(slopes[1], rel=1e-3)
    assert column_stress(0.0, f_y, modulus) == pytest.approx(f_y)
    assert column_stress(200.0, f_y, modulus) == pytest.approx(math.pi**2 * modulus / 200.0**2)


@pytest.mark.parametrize(
    ("ratio", "alpha"), [(1.0, 0.208), (1.5, 0.231), (2.0, 0.246), (3.0, 0.267), (6.0, 0.299), (10.0, 0.312)]
)
def test_torsion_of_a_rectangle(ratio: float, alpha: float) -> None:
    """τ = T / (α b c²), α as tabulated in Timoshenko and Goodier, Theory of Elasticity, torsion of rectangular bars."""
    b, c, torsion = 10.0 * ratio, 10.0, 1e5
    assert float(rectangle_torsion_stress(np.array(torsion), b, c)) == pytest.approx(
        torsion / (alpha * b * c**2), rel=0.045
    )


def test_section_stress_of_a_bar_by_hand() -> None:
    """60 × 12 mm: 36 kN gives 50 MPa, 1.44 kN·m in plane 200 MPa, 144 N·m out of plane 100 MPa."""
    one = np.array(1.0)
    stress = section_stress(36e3 * one, 1.44e6 * one, 144e3 * one, 0.0 * one, 60.0, 12.0)
    assert float(stress) == pytest.approx(350.0)


def test_line_contact_by_hand() -> None:
    """Two steels, E 206 GPa, ν 0.3: E* = 113.187 GPa. 10 kN over 20 mm on a radius of 12.5 mm: p0 = 1200.4 MPa."""
    modulus = 206e3 / (2 * (1 - 0.09))
    assert modulus == pytest.approx(113187, rel=1e-5)
    assert float(line_contact_pressure(10e3, 20.0, 12.5, modulus)) == pytest.approx(1200.4, abs=0.1)
    force = float(line_contact_yield_force(20.0, 12.5, modulus, 650.0))
    assert float(line_contact_pressure(force, 20.0, 12.5, modulus)) == pytest.approx(1.67 * 650.0)
