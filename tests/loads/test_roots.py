"""Bracketed roots and refined peaks, against a general-purpose library and over random functions."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.optimize import brentq

from loads.roots import bracketed_root, first_down_crossing, refined_peak


@given(st.lists(st.tuples(st.floats(0.05, 3.0), st.floats(-1.5, 1.5)), min_size=1, max_size=6))
def test_roots_agree_with_brent(rows: list[tuple[float, float]]) -> None:
    k, shift = (np.array(column) for column in zip(*rows, strict=True))

    def f(x: np.ndarray[tuple[int, ...], np.dtype[np.float64]]) -> np.ndarray[tuple[int, ...], np.dtype[np.float64]]:
        return np.asarray(np.tanh(k * (x - shift)) + 0.1 * (x - shift) ** 3)

    found = bracketed_root(f, np.full(len(k), -4.0), np.full(len(k), 5.0))
    for i in range(len(k)):
        wanted = brentq(
            lambda x, i=i: float(np.tanh(k[i] * (x - shift[i])) + 0.1 * (x - shift[i]) ** 3), -4.0, 5.0, xtol=1e-14
        )
        assert found[i] == pytest.approx(wanted, abs=1e-11)


@pytest.mark.parametrize("power", [3, 5, 9])
def test_a_flat_root_is_closed_in_on_by_bisection(power: int) -> None:
    root = bracketed_root(lambda x: (x - 0.3) ** power, np.array([-1.0]), np.array([2.0]))
    assert root[0] == pytest.approx(0.3, abs=2e-2 if power == 9 else 1e-4)


def test_a_jump_and_a_root_at_the_bracket_s_end() -> None:
    jump = bracketed_root(lambda x: np.where(x < 0.7, 1.0, -2.0), np.array([0.0]), np.array([1.0]))
    assert jump[0] == pytest.approx(0.7, abs=1e-12)
    end = bracketed_root(lambda x: x - 1.0, np.array([0.0, 1.0]), np.array([1.0, 4.0]))
    assert end == pytest.approx([1.0, 1.0])


def test_no_bracket_gives_no_root() -> None:
    x = np.array([[0.0, 1.0, 2.0], [0.0, 1.0, 2.0]])
    low, high = first_down_crossing(x, np.array([[1.0, 0.5, -1.0], [-1.0, 1.0, 2.0]]))
    assert (low[0], high[0]) == (1.0, 2.0)
    assert np.isnan(low[1])
    assert np.isnan(bracketed_root(lambda t: t - 1.5, low, high)[1])
    assert bracketed_root(lambda t: t - 1.5, low, high)[0] == pytest.approx(1.5)


def test_peaks_smooth_kinked_and_cut_off() -> None:
    place, height = refined_peak(
        lambda x: np.stack(
            [-((x[0] - 0.123456) ** 2), -np.abs(x[1] - 0.7), x[2], np.where(x[3] < 0.4, 0.0, 2.0 - x[3])]
        ),
        np.zeros(4),
        np.ones(4),
    )
    assert place == pytest.approx([0.123456, 0.7, 1.0, 0.4], abs=1e-6)
    assert height == pytest.approx([0.0, 0.0, 1.0, 1.6], abs=1e-5)


def test_values_too_small_to_divide_by_do_no_harm() -> None:
    shift = np.array([0.0, -1.1125369292536007e-308])
    k = np.array([3.0, 0.5625])
    root = bracketed_root(
        lambda x: np.tanh(k * (x - shift)) + 0.1 * (x - shift) ** 3, np.full(2, -4.0), np.full(2, 5.0)
    )
    assert root == pytest.approx([0.0, 0.0], abs=1e-11)


def test_a_root_that_is_found_stays_while_others_are_looked_for() -> None:
    k = np.array([1.375, 0.125])
    root = bracketed_root(lambda x: np.tanh(k * x) + 0.1 * x**3, np.full(2, -4.0), np.full(2, 5.0))
    assert root == pytest.approx([0.0, 0.0], abs=1e-11)
