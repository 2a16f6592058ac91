"""Where the stop stands in the disc frame: one function for disc, stop, proportions and pictures."""

from __future__ import annotations

import math

from parts.design import Mechanism
from parts.hardware import cap_screw
from parts.sizes import StopSizes

HEAD_BELOW = 0.5  # mm by which a sunk bolt head lies below its face; common practice, no source
BOLT_REACH = (
    0.9  # of a block's height that its bolts fill, so that none stands out of its top; common practice, no source
)
HOLES_AT = 0.25  # of the block's length and width, either side of its middle


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


def block_hole_offsets(stop: StopSizes) -> tuple[tuple[float, float, float], ...]:
    """Holes of a block in its own frame: along the link and across it from the block's middle, and room in the disc.

    Dowels on one diagonal, bolts on the other; x runs along the seated link towards the chain pin, y towards the link in
    a ccw machine. Dowels come first. The room is the diameter of the dowel or of the sink for the bolt's head. mm.
    """
    x, y = HOLES_AT * stop.length, HOLES_AT * stop.width
    sink = cap_screw(stop.bolt_thread).counterbore_diameter
    return ((-x, -y, stop.dowel_diameter), (x, y, stop.dowel_diameter), (-x, y, sink), (x, -y, sink))


def floor_under_head(plate: float, thread: str) -> float:
    """What is left of a plate (mm) under a sunk bolt head; 0 where the sink goes through it."""
    return max(0.0, plate - cap_screw(thread).head_height - HEAD_BELOW)


def bolt_engagement(stop: StopSizes) -> float:
    """Length (mm) of thread that a block's bolts have in it."""
    return BOLT_REACH * stop.height
