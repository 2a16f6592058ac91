"""Mean stress and cycle counting, against an outside fatigue library (GPL, in the tests only; it takes long to import)."""

from __future__ import annotations

import numpy as np
import pytest

from loads.fatigue.counting import closed, count_cycles, turning_points
from loads.fatigue.strength import reversed_stress


def test_goodman_is_the_library_s() -> None:
    """Goodman–Haigh with exponent 1 from each cycle's own stress ratio to R = −1."""
    from py_fatigue.mean_stress.corrections import goodman_haigh_mean_stress_correction

    rng = np.random.default_rng(3)
    amplitude, mean = rng.uniform(20.0, 250.0, 40), rng.uniform(1.0, 300.0, 40)
    theirs, _ = goodman_haigh_mean_stress_correction(amplitude, mean, r_out=-1.0, ult_s=770.0, correction_exponent=1.0)
    assert reversed_stress(amplitude, mean, 770.0) == pytest.approx(np.ravel(theirs), rel=1e-6)


def test_cycles_are_the_library_s() -> None:
    """The same closed history, begun at its greatest: ranges and means of all whole cycles."""
    from py_fatigue.cycle_count import rainflow

    history = np.random.default_rng(5).uniform(-100.0, 200.0, 60)
    points = turning_points(closed(history[None, :])[0])
    amplitude, mean, count = count_cycles(points)
    theirs = np.asarray(rainflow.rainflow(points.tolist(), extended_output=False))  # amplitude, mean, count, …
    assert count.sum() > 5
    ours = sorted(zip(amplitude, mean, count, strict=True))
    assert np.array(ours) == pytest.approx(np.array(sorted(map(tuple, theirs[:, :3]))))
