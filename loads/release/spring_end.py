"""The spring on both sides of zero draw, as plain functions of numbers: N and N·mm over mm."""

from __future__ import annotations

from bisect import bisect_right
from collections.abc import Callable

from loads.spring_law import SpringLaw

Function = Callable[[float], float]


def spring_end(law: SpringLaw) -> tuple[Function, Function]:
    """Force and energy over draw. Below zero draw the spring goes on as it began, down to no force: it never pushes.

    Above a table's last point its last value serves, as in the cycle.
    """
    if law.draws is None or law.forces is None:
        xs, fs = [0.0, 1.0], [float(law.preload), float(law.preload) + float(law.rate)]
        beyond = float(law.rate)
    else:
        xs, fs = [float(x) for x in law.draws], [float(f) for f in law.forces]
        beyond = 0.0
    first = (fs[1] - fs[0]) / (xs[1] - xs[0])
    # where the extrapolated line meets no force; a falling or constant start goes on for ever
    rest = -fs[0] / first if first > 0.0 else float("-inf")
    works = [0.0]
    for i in range(1, len(xs)):
        works.append(works[-1] + (xs[i] - xs[i - 1]) * (fs[i] + fs[i - 1]) / 2.0)

    def force(x: float) -> float:
        if x <= 0.0:
            return fs[0] + first * x if x > rest else 0.0
        if x >= xs[-1]:
            return fs[-1] + beyond * (x - xs[-1])
        i = bisect_right(xs, x) - 1
        return fs[i] + (fs[i + 1] - fs[i]) * (x - xs[i]) / (xs[i + 1] - xs[i])

    def work(x: float) -> float:
        if x <= 0.0:
            at = max(x, rest)
            return at * (fs[0] + force(at)) / 2.0
        if x >= xs[-1]:
            return works[-1] + (x - xs[-1]) * (fs[-1] + force(x)) / 2.0
        i = bisect_right(xs, x) - 1
        return works[i] + (x - xs[i]) * (fs[i] + force(x)) / 2.0

    return force, work
