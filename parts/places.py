"""Where things sit on the crank disc: one function a place, used by the disc and by the part that goes there.

All in the disc frame of a counter-clockwise design (origin O, x along O→A). A clockwise one has every y negated;
see ``making.flipped``. Where the stop stands is worked out in ``parts.stop_layout``.
"""

from __future__ import annotations

from math import cos, sin, tau

from parts.design import Design
from parts.outline import Point
from parts.sizes import DiscSizes, LockPinSizes, Sizes, StopSizes
from parts.stop_layout import block_hole_offsets, stop_center


def crank_pin(design: Design) -> Point:
    return (design.mechanism.crank_radius, 0.0)


def stop_middle(design: Design, sizes: Sizes) -> Point:
    """Axis of the post, or middle of the block."""
    return stop_center(design.mechanism, sizes.link.width, sizes.stop)[0]


def seat_direction(design: Design, sizes: Sizes) -> float:
    """Direction (rad) of the seated link's axis, from crank pin to chain pin; a stop block lies along it."""
    return stop_center(design.mechanism, sizes.link.width, sizes.stop)[1]


def block_holes(stop: StopSizes) -> dict[str, Point]:
    """Dowel and bolt holes of a stop block, in its own frame (x along the seated link, from the block's middle)."""
    names = ("dowel_hole_1", "dowel_hole_2", "bolt_hole_1", "bolt_hole_2")
    return {name: (along, across) for name, (along, across, _) in zip(names, block_hole_offsets(stop), strict=True)}


def on_disc(design: Design, sizes: Sizes, point: Point) -> Point:
    """A point of the stop block's frame in the disc frame."""
    (x, y), direction = stop_center(design.mechanism, sizes.link.width, sizes.stop)
    c, s = cos(direction), sin(direction)
    return (x + point[0] * c - point[1] * s, y + point[0] * s + point[1] * c)


def lock_holes(lock: LockPinSizes) -> dict[str, Point]:
    """The lock pin's holes in the disc: where it is at the start, and at the hold."""
    named = {"lock_hole_start": lock.start_angle, "lock_hole_hold": lock.hold_angle}
    return {name: (lock.radius * cos(a), lock.radius * sin(a)) for name, a in named.items()}


def lock_pin(lock: LockPinSizes) -> Point:
    """The lock pin itself, in the disc frame at the hold."""
    return lock_holes(lock)["lock_hole_hold"]


def hub_bolts(disc: DiscSizes) -> tuple[Point, ...]:
    angles = (disc.bolt_phase + tau * i / disc.bolt_count for i in range(disc.bolt_count))
    return tuple((disc.bolt_circle / 2 * cos(a), disc.bolt_circle / 2 * sin(a)) for a in angles)
