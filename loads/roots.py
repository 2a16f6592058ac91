"""Bracketed roots and refined peaks of many functions at once.

The functions take and return arrays of one shape, one element a problem, so that ten thousand designs cost little more
than one. Written here because the library routines for this take longer to import than ``check`` takes to run.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from parts.design import Floats

SLOW = 14  # steps of false position before bisection takes over


def first_down_crossing(x: Floats, f: Floats) -> tuple[Floats, Floats]:
    """Bracket of the first place where sampled ``f`` goes from above zero to zero or below.

    ``x`` and ``f`` have shape (..., n); the two ends of the bracket come back with shape (...), NaN where there is none.
    """
    down = (f[..., :-1] > 0.0) & (f[..., 1:] <= 0.0)
    index = np.argmax(down, axis=-1)[..., None]
    some = np.any(down, axis=-1)
    low = np.take_along_axis(x, index, axis=-1)[..., 0]
    high = np.take_along_axis(x, index + 1, axis=-1)[..., 0]
    return np.where(some, low, np.nan), np.where(some, high, np.nan)


def bracketed_root(function: Callable[[Floats], Floats], low: Floats, high: Floats, tolerance: float = 1e-13) -> Floats:
    """Root of ``function`` in each bracket [low, high]: false position, with bisection where that is slow.

    All arrays have one shape; a NaN bracket gives NaN. ``tolerance`` is absolute, in the unit of the bracket.
    Source: N. Anderson and A. Björck, A new high order method of regula falsi type, BIT 13 (1973).
    """
    a, b = np.array(low, dtype=float), np.array(high, dtype=float)
    fa, fb = function(a), function(b)
    best = np.where(np.abs(fa) < np.abs(fb), a, b)
    open_ = np.isfinite(best) & (fa != 0.0) & (fb != 0.0)
    for step in range(90):
        if not np.any(open_):
            break
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
            x = b - fb * (b - a) / (fb - fa)
        # far more steps than a smooth function takes, or a step out of the bracket
        x = np.where(((x - a) * (x - b) <= 0.0) & (step < SLOW), x, 0.5 * (a + b))
        fx = function(x)
        moved = np.abs(x - best)
        best = np.where(open_, x, best)
        crossed = np.sign(fx) * np.sign(fb) < 0.0
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
            shrink = 1.0 - fx / fb
        fa = np.where(crossed, fb, fa * np.where((shrink > 0.0) & np.isfinite(shrink), shrink, 0.5))
        a, b, fb = np.where(crossed, b, a), x, fx
        open_ = open_ & (fx != 0.0) & (np.minimum(moved, np.abs(b - a)) > tolerance)
    return best


def refined_peak(
    function: Callable[[Floats], Floats], low: Floats, high: Floats, rounds: int = 4, cuts: int = 41
) -> tuple[Floats, Floats]:
    """Place and height of the largest value of ``function`` in each interval, which must hold one hump.

    ``function`` takes points of shape (..., k, cuts) and returns their values; ``low`` and ``high`` have shape (..., k).
    Each round keeps the two cells next to the best point, so kinks and jumps are closed in on as well as smooth humps.
    """
    fraction = np.linspace(0.0, 1.0, cuts)
    low, high = np.array(low, dtype=float), np.array(high, dtype=float)
    place, height = low, np.full(low.shape, -np.inf)
    for _ in range(rounds):
        x = low[..., None] + (high - low)[..., None] * fraction
        f = function(x)
        index = np.argmax(f, axis=-1)[..., None]
        here = np.take_along_axis(f, index, axis=-1)[..., 0]
        at = np.take_along_axis(x, index, axis=-1)[..., 0]
        better = here > height
        place, height = np.where(better, at, place), np.where(better, here, height)
        low = np.take_along_axis(x, np.maximum(index - 1, 0), axis=-1)[..., 0]
        high = np.take_along_axis(x, np.minimum(index + 1, cuts - 1), axis=-1)[..., 0]
    return place, height
