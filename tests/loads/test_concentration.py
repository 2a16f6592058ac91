"""Stress concentration factors against tabulated values and what they must tend to."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest

from loads.checks import concentration as k


@pytest.mark.parametrize(("ratio", "gross"), [(0.1, 3.03), (0.2, 3.14), (0.3, 3.36), (0.4, 3.74), (0.5, 4.32)])
def test_howlands_strip(ratio: float, gross: float) -> None:
    """Howland, 1930: stress at the hole over the stress far from it (from memory, as reprinted in texts on elasticity)."""
    assert float(k.hole_in_strip_tension(ratio, 1.0)) == pytest.approx(gross * (1.0 - ratio), rel=0.02)


def test_a_small_hole_has_three() -> None:
    """Kirsch: three times the stress far away; in a bent strip a small hole has twice the stress at its edge's height."""
    assert float(k.hole_in_strip_tension(0.0, 1.0)) == 3.0
    assert float(k.hole_in_strip_bending(0.01, 1.0)) == 2.0


@pytest.mark.parametrize("ratio", [0.3, 0.4, 0.5, 0.6])
def test_eyes_by_three_authors(ratio: float) -> None:
    """Heywood's lug against 2.75 (R_o/R_i − 1)^−0.675 on the bearing stress, straight lugs in damage tolerance work (from
    memory), and above the curve for a pin in a strip whose end is a width away."""
    bearing = 2.75 * (1.0 / ratio - 1.0) ** -0.675
    eye = float(k.pin_loaded_eye(ratio, 1.0))
    assert eye == pytest.approx(bearing * (1.0 - ratio) / ratio, rel=0.12)
    assert float(k.pin_loaded_strip(ratio, 1.0)) <= eye


ROARK: dict[str, tuple[Callable[..., object], list[tuple[float, float, float]], list[tuple[float, float, float]]]] = {
    # Young and Budynas, Roark's Formulas for Stress and Strain, table 17.1: an independent fit, h/r to 2 and beyond
    "tension": (
        k.shoulder_tension,
        [(0.927, 1.149, -0.086), (0.011, -3.029, 0.948), (-0.304, 3.979, -1.737), (0.366, -2.098, 0.875)],
        [(1.225, 0.831, -0.010), (-1.831, -0.318, -0.049), (2.236, -0.522, 0.176), (-0.630, 0.009, -0.117)],
    ),
    "bending": (
        k.shoulder_bending,
        [(0.927, 1.149, -0.086), (0.015, -3.281, 0.837), (0.847, 1.716, -0.506), (-0.790, 0.417, -0.246)],
        [(1.225, 0.831, -0.010), (-3.790, 0.958, -0.257), (7.374, -4.834, 0.862), (-3.809, 3.046, -0.595)],
    ),
}


@pytest.mark.parametrize("load", ROARK)
@pytest.mark.parametrize("depth", [0.5, 1.0, 1.9, 2.5, 6.0])
@pytest.mark.parametrize("radius", [0.02, 0.05, 0.1])
def test_shoulders_against_roark(load: str, depth: float, radius: float) -> None:
    function, low, high = ROARK[load]
    h = depth * radius
    x = 2.0 * h / (1.0 + 2.0 * h)
    rows = low if depth <= 2.0 else high
    roark = sum((a + b * depth**0.5 + c * depth) * x**i for i, (a, b, c) in enumerate(rows))
    assert function(1.0 + 2.0 * h, 1.0, radius) == pytest.approx(roark, rel=0.03)


def test_shoulders_as_read_from_petersons_charts() -> None:
    """r/d = 0.1: about 1.7 bent at D/d 1.5 and 1.9 pulled, 1.4 twisted at D/d 1.33 (read off the charts, from memory)."""
    assert float(k.shoulder_bending(1.5, 1.0, 0.1)) == pytest.approx(1.7, rel=0.04)
    assert float(k.shoulder_tension(1.5, 1.0, 0.1)) == pytest.approx(1.9, rel=0.04)
    assert float(k.shoulder_torsion(1.33, 1.0, 0.1)) == pytest.approx(1.4, rel=0.04)


def test_half_round_grooves() -> None:
    """h/r = 1: 3.004 − 5.963x + 6.836x² − 2.893x³ pulled and 3.032 − 7.431x + 10.390x² − 5.009x³ bent, x = 2h/D (Pilkey)."""
    for h in (0.02, 0.1, 0.2):
        x = 2.0 * h
        pulled, bent = k.groove_tension(1.0, 1.0 - 2.0 * h, h), k.groove_bending(1.0, 1.0 - 2.0 * h, h)
        assert float(pulled) == pytest.approx(3.004 - 5.963 * x + 6.836 * x**2 - 2.893 * x**3, rel=0.02)
        assert float(bent) == pytest.approx(3.032 - 7.431 * x + 10.390 * x**2 - 5.009 * x**3, rel=0.03)


@pytest.mark.parametrize(
    "function",
    [k.shoulder_tension, k.shoulder_bending, k.shoulder_torsion, k.groove_tension, k.groove_bending, k.groove_torsion],
)
def test_round_bars_behave(function: Callable[..., object]) -> None:
    """Sharper is worse, the two fits of a curve meet, arrays give what numbers give, beyond the curve nothing is told."""
    radii = np.array([0.04, 0.05, 0.08, 0.12])
    values = np.asarray(function(1.2, 1.0, radii))
    assert np.all(np.diff(values) < 0.0)
    assert np.all(values > 1.0)
    assert values == pytest.approx([float(np.asarray(function(1.2, 1.0, float(r)))) for r in radii])
    below, above = (float(np.asarray(function(1.2, 1.0, 0.05 * (1.0 + s)))) for s in (1e-6, -1e-6))
    assert below == pytest.approx(above, rel=0.02)
    with pytest.raises(ValueError, match="runs from"):
        function(1.2, 1.0, 0.0001)


def test_outside_their_curves_holes_are_refused() -> None:
    with pytest.raises(ValueError, match="hole over width"):
        k.pin_loaded_eye(0.8, 1.0)
    with pytest.raises(ValueError, match="hole over width"):
        k.pin_loaded_strip(0.1, 1.0)
