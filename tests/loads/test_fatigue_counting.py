"""Counted cycles, against the example of the standard."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra import numpy as hnp
from rainflow import extract_cycles

from loads.fatigue.counting import closed, count_cycles, most_cycles, padded, turning_points
from parts.design import Floats

ASTM = [-2.0, 1.0, -3.0, 5.0, -1.0, 3.0, -4.0, 4.0, -2.0]  # figure 6


def counts(history: list[float]) -> dict[float, float]:
    amplitude, _, count = count_cycles(turning_points(np.array([*history, history[0]])))
    found: dict[float, float] = {}
    for a, n in zip(amplitude, count, strict=True):
        found[round(2.0 * float(a), 9)] = found.get(round(2.0 * float(a), 9), 0.0) + float(n)
    return found


def test_the_standard_s_example() -> None:
    """ASTM E1049 figure 6: half cycles of 3, 4, 8, 9, 8 and 6, one whole cycle of 4."""
    found: dict[float, float] = {}
    for size, _, count, _, _ in extract_cycles(ASTM):
        found[size] = found.get(size, 0.0) + count
    assert found == {3.0: 0.5, 4.0: 1.5, 6.0: 0.5, 8.0: 1.0, 9.0: 0.5}


def test_the_standard_s_example_repeated() -> None:
    """The same history repeating, begun at its greatest: cycles of 3, 4, 7 and 9, one each.

    Worked by hand: 5 −1 3 −4 4 −2 1 −3 5. The standard's figure 7 has the same, from memory.
    """
    assert counts(ASTM) == {3.0: 1.0, 4.0: 1.0, 7.0: 1.0, 9.0: 1.0}


def test_a_history_from_rest_to_rest() -> None:
    history = closed(np.array([[3.0, 7.0, 2.0, 5.0], [0.0, 0.0, 0.0, 0.0], [-2.0, 4.0, 4.0, 4.0]]))
    assert history.shape == (3, 6)
    amplitude, mean, count = count_cycles(turning_points(history[0]))
    assert sorted(zip(amplitude, mean, strict=True)) == [(1.5, 3.5), (3.5, 3.5), (3.5, 3.5)]
    assert count.sum() == 2.0
    assert count_cycles(turning_points(history[1]))[0].sum() == 0.0
    amplitude, mean, count = count_cycles(turning_points(history[2]))
    assert set(zip(amplitude, mean, strict=True)) == {(3.0, 1.0)}
    assert count.sum() == 1.0


def test_rounding_is_no_cycle() -> None:
    flat = 100.0 + 1e-9 * np.array([[0.0, 1.0, -1.0, 2.0, 0.0, 1.0]])
    assert count_cycles(turning_points(closed(flat)[0]))[2].sum() == 1.0


histories = hnp.arrays(
    np.float64, st.tuples(st.integers(1, 4), st.integers(1, 40)), elements=st.integers(-9, 9).map(float)
)


@given(histories)
def test_whatever_the_history(history: Floats) -> None:
    """The largest cycle is from the least to the greatest; no more cycles than foreseen; a shift changes nothing."""
    loops = closed(history)
    most = most_cycles(loops)
    for loop, bound in zip(loops, most, strict=True):
        amplitude, mean, count = count_cycles(turning_points(loop))
        top, bottom = loop.max(), loop.min()
        assert amplitude.max(initial=0.0) == (top - bottom) / 2.0
        assert count.sum() <= max(bound, 1.0)
        assert np.all(mean + amplitude <= top + 1e-12)
        assert np.all(mean - amplitude >= bottom - 1e-12)
        shifted = np.roll(loop[:-1], 3)
        again = count_cycles(turning_points(np.append(shifted, shifted[0])))
        assert (again[0] ** 3 @ again[2]) == pytest.approx(amplitude**3 @ count)


def test_padding() -> None:
    one, two = np.array([1.0]), np.array([2.0, 3.0])
    amplitude, _, count = padded([(one, one, one), (two, two, two)])
    assert amplitude.tolist() == [[1.0, 0.0], [2.0, 3.0]]
    assert count.tolist() == [[1.0, 0.0], [2.0, 3.0]]
    assert padded([])[0].shape == (0, 0)
