"""Where the stop stands in the disc frame: one function for disc, stop, proportions and pictures."""

from __future__ import annotations

import math

from parts.design import Mechanism
from parts.sizes import StopSizes

DOWEL_AT, BOLT_AT = 0.36, 0.13  # of the block's length, either side of its middle


def stop_center(m: Mechanism, link_width: float, stop: StopSizes) -> tuple[tuple[float, float], float]:
    """Middle of the post or block (mm, disc frame) and direction of the seated link A→B (rad), of a ccw machine.

    The stop touches the flank at ``stop_reach`` from the crank pin, on the side from which it pushes in the direction of
    rotation; a cw machine is the mirror image.
    """
    direction = math.pi + m.seat_angle
    ex, ey = math.cos(direction), math.sin(direction)
    nx, ny = -ey, ex
    away = link_width / 2.0 + (stop.diameter if stop.style == "post" else stop.width) / 2.0
    x = m.crank_radius + m.stop_reach * ex - away * nx
    y = m.stop_reach * ey - away * ny
    return (x, y), direction


def block_hole_offsets(stop: StopSizes) -> tuple[tuple[float, float], ...]:
    """Holes of a block in the disc: place along the link from the block's middle, and diameter (mm); dowels first."""
    return (
        (-DOWEL_AT * stop.length, stop.dowel_diameter), (DOWEL_AT * stop.length, stop.dowel_diameter),
        (-BOLT_AT * stop.length, stop.bolt_hole), (BOLT_AT * stop.length, stop.bolt_hole),
    )  # fmt: skip
