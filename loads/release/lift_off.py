"""Where the link lifts off its stop, friction included."""

from __future__ import annotations

import math

from loads.lines import FarLine

MOST_HELD = math.radians(20.0)  # of the disc's turn, over which friction may hold the link on its stop


def lets_go(
    far: FarLine, crank_radius: float, link_length: float, seat: float, release: float, friction: float
) -> float:
    """Crank angle (rad) at which the line overcomes the friction that holds the link on its stop beyond the release.

    ``friction`` is μ ρ (mm) of both the link's pins together; each bears about as much as the line pulls, so that both
    sides of the balance have the same factor. ``far`` holds plain numbers. Source: moments about the crank pin.
    """

    def held(theta: float) -> bool:
        ex, ey = math.cos(theta + math.pi + seat), math.sin(theta + math.pi + seat)
        bx = crank_radius * math.cos(theta) + link_length * ex
        by = crank_radius * math.sin(theta) + link_length * ey
        at = far.line(crank_radius, bx, by, 0.0, link_length)  # type: ignore[arg-type]
        return link_length * (ex * float(at.uy) - ey * float(at.ux)) < friction

    low, high = release, release + MOST_HELD
    if friction <= 0.0 or held(high):
        return release
    for _ in range(50):
        middle = (low + high) / 2.0
        low, high = (middle, high) if held(middle) else (low, middle)
    return high
