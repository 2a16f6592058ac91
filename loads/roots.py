"""Bracketed roots and refined peaks of many functions at once.

The functions take and return arrays of one shape, one element a problem, so that ten thousand designs cost little more
than one. Written here because the library routines for this take longer to import than ``check`` takes to run.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from parts.design import Floats


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
    """Root of ``function`` in each bracket [low, high], by inverse quadratic interpolation guarded by bisection.

    All arrays have one shape; a NaN bracket gives NaN. ``tolerance`` is absolute, in the unit of the bracket.
    Source: T. R. Chandrupatla, A new hybrid quadratic/bisection algorithm, Advances in Engineering Software 28 (1997).
    """
    b, a = np.array(low, dtype=float), np.array(high, dtype=float)
    fa, fb = function(a), function(b)
    c, fc = a.copy(), fa.copy()
    t = np.full_like(a, 0.5)
    best = np.where(np.abs(fa) < np.abs(fb), a, b)
    for _ in range(80):
        x = a + t * (b - a)
        fx = function(x)
        same = np.sign(fx) == np.sign(fa)
        c, fc = np.where(same, a, b), np.where(same, fa, fb)
        b, fb = np.where(same, b, a), np.where(same, fb, fa)
        a, fa = x, fx
        best = np.where(np.abs(fa) < np.abs(fb), a, b)
        width = np.abs(b - a)
        if not np.any((width > 2.0 * tolerance) & (np.where(np.abs(fa) < np.abs(fb), fa, fb) != 0.0)):
            break
        with np.errstate(divide="ignore", invalid="ignore"):
            xi = (a - b) / (c - b)
            phi = (fa - fb) / (fc - fb)
            t_quadratic = fa / (fb - fa) * fc / (fb - fc) + (c - a) / (b - a) * fa / (fc - fa) * fb / (fc - fb)
            inside = (1.0 - np.sqrt(1.0 - xi) < phi) & (phi < np.sqrt(xi))
            edge = np.minimum(0.5, tolerance / width)
        t = np.where(inside & np.isfinite(t_quadratic), t_quadratic, 0.5)
        t = np.clip(t, edge, 1.0 - edge)
    return best


def refined_peak(
    function: Callable[[Floats], Floats], low: Floats, high: Floats, rounds: int = 6, cuts: int = 21
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
