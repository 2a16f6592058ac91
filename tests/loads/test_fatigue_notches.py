"""Stress round a loaded hole: the series it stands on, its balance, and how it joins the published curves."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import integrate

from loads.checks.concentration import pin_loaded_eye, shoulder_bending
from loads.fatigue.notches import (
    HARMONICS,
    STEPS,
    edge_stress,
    influence,
    outward_concentration,
    step_concentration,
)
from parts.design import Floats
from tests.loads.hole_influence import RATIOS, Hole

POINTS = np.radians(np.arange(0.0, 360.0, 15.0))


def pin_in_plate(force: Floats, points: Floats, nu: float = 0.3) -> Floats:
    """Hoop stress times d t (N) at points of a hole's edge, from a pin that pushes in a wide plate.

    ``force`` (2, n) of the pin on the plate, ``points`` (k) directions from the hole's middle (rad); gives (k, n). The
    pin presses with p = 4P/(π d t)·cos δ over the half of the edge it pushes, δ from the force. Fourier's series of that
    pressure and Airy's function of each term add up to σ = −p(δ) + 2 p₀ + p₁ (3 − ν)/2 cos δ, where p₀ = 4/π² and
    p₁ = 2/π of P/(d t). Source: plane elasticity (Timoshenko and Goodier, Theory of Elasticity, polar coordinates),
    worked out here; the tests add the series up.
    """
    along = np.stack([np.cos(points), np.sin(points)], axis=1) @ force  # P cos δ
    size = np.hypot(force[0], force[1])
    pressure = 4.0 / math.pi * np.maximum(along, 0.0)
    return np.asarray(8.0 / math.pi**2 * size + (3.0 - nu) / math.pi * along - pressure)


def test_the_closed_form_is_the_series() -> None:
    """Each term p_n cos nδ of the pressure gives −p_n cos nδ at the edge, the even one +p_0, the first (1 − ν)/2 p_1."""
    nu = 0.3

    def pressure(delta: float) -> float:
        return 4.0 / math.pi * max(math.cos(delta), 0.0)

    def term(n: int) -> float:
        share = 1.0 if n else 0.5
        return (
            share
            / math.pi
            * float(integrate.quad(lambda x: pressure(x) * math.cos(n * x), -math.pi / 2, math.pi / 2)[0])
        )

    p = [term(n) for n in range(120)]
    assert p[0] == pytest.approx(4.0 / math.pi**2)
    assert p[1] == pytest.approx(2.0 / math.pi)
    series = p[0] + p[1] * (1.0 - nu) / 2.0 * np.cos(POINTS)
    series -= sum(p[n] * np.cos(n * POINTS) for n in range(2, 120))
    closed_form = pin_in_plate(np.array([[1.0], [0.0]]), POINTS, nu)[:, 0]
    assert closed_form == pytest.approx(series, abs=4e-3)


@given(st.floats(-math.pi, math.pi), st.floats(0.1, 1e5))
def test_the_stress_turns_with_the_force(direction: float, size: float) -> None:
    force = size * np.array([[math.cos(direction)], [math.sin(direction)]])
    straight = pin_in_plate(np.array([[size], [0.0]]), POINTS - direction)
    assert pin_in_plate(force, POINTS) == pytest.approx(straight, rel=1e-6, abs=1e-6 * size)


@pytest.mark.parametrize("kind", ["eye", "edge"])
@pytest.mark.parametrize("ratio", [0.25, 0.6])
def test_the_table_is_what_finite_elements_give(kind: str, ratio: float) -> None:
    """A pin that presses by the cosine, at any angle, solved whole: within 5 % of the greatest stress at every point."""
    hole = Hole(kind, 10.0 / ratio, 10.0)
    for degrees in (0.0, 40.0, 90.0, 130.0, 180.0):
        force = -1000.0 * np.array([math.cos(math.radians(degrees)), math.sin(math.radians(degrees))])
        solved = hole.stress(hole.plate.pin(0.0, 10.0, (float(force[0]), float(force[1]))), POINTS)
        ours = edge_stress(kind, force[:, None], POINTS, math.pi, 10.0, 10.0 / ratio, 1.0)[:, 0]
        assert np.abs(ours - solved).max() < 0.05 * max(np.abs(solved).max(), 100.0)


@pytest.mark.parametrize("ratio", [0.25, 0.3, 0.4, 0.5, 0.65])
def test_an_outward_pull_is_no_less_than_the_published_curve(ratio: float) -> None:
    """The cosine is harsher than a neat pin, which spreads in a large hole, and never more than 5 % milder."""
    published = float(pin_loaded_eye(10.0, 10.0 / ratio))
    assert 0.95 * published < outward_concentration("eye", 10.0, 10.0 / ratio) < 1.45 * published


@pytest.mark.parametrize("kind", ["eye", "edge"])
@given(st.floats(-math.pi, math.pi), st.floats(-math.pi, math.pi), st.floats(0.1, 0.9))
def test_it_turns_with_the_part_and_mirrors(kind: str, outward: float, off: float, ratio: float) -> None:
    def stress(out: float, away: float, points: Floats) -> Floats:
        force = 1000.0 * np.array([[math.cos(out + away)], [math.sin(out + away)]])
        return edge_stress(kind, force, points, out, 10.0 * ratio, 10.0, 5.0)[:, 0]

    plain = stress(0.0, off, POINTS)
    assert stress(outward, off, POINTS + outward) == pytest.approx(plain, rel=1e-6, abs=1e-6 * np.abs(plain).max())
    assert stress(0.0, -off, -POINTS) == pytest.approx(plain, rel=1e-6, abs=1e-6 * np.abs(plain).max())


def test_a_small_hole_far_from_the_edge_is_a_hole_in_a_wide_plate() -> None:
    """The first row of the edge's table, d a fifth of twice the distance: within a third of the closed form, above it."""
    force = np.array([[-1000.0], [0.0]])
    ours = edge_stress("edge", force, POINTS, math.pi, 10.0, 50.0, 1.0).max()
    assert 1.0 < ours / (pin_in_plate(force, POINTS).max() / 10.0) < 1.45


def test_the_table_is_whole() -> None:
    for kind in ("eye", "edge"):
        for ratio in (0.01, *RATIOS, 0.95):
            assert influence(kind, ratio, STEPS).shape == (len(STEPS), len(HARMONICS))
        # nothing jumps where the table ends
        for ratio in (RATIOS[0], RATIOS[-1]):
            below, above = influence(kind, ratio - 1e-9, STEPS), influence(kind, ratio + 1e-9, STEPS)
            assert below == pytest.approx(above, abs=1e-6)


def test_a_shoulder_beyond_its_curve() -> None:
    assert step_concentration(20.0, 20.0, 0.5) == 1.0
    assert step_concentration(20.0, 16.0, 0.5) == pytest.approx(float(shoulder_bending(20.0, 16.0, 0.5)))
    assert step_concentration(30.0, 10.0, 0.01) == pytest.approx(float(shoulder_bending(30.0, 10.0, 0.5)))
    assert step_concentration(20.2, 20.0, 5.0) >= 1.0
