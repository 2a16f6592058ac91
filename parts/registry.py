"""The made parts of a machine: one generator a part, in the order of the parts list."""

from __future__ import annotations

from collections.abc import Callable

from parts import chain_pin, crank_disc, crank_pin, end_piece, lock_pin, spacers, stop, swing_link
from parts.design import Design
from parts.outline import Part
from parts.sizes import Sizes
from parts.stack import Stack

GENERATORS: tuple[Callable[[Design, Sizes, Stack], list[Part]], ...] = (
    crank_disc.make,
    swing_link.make,
    stop.make,
    crank_pin.make,
    chain_pin.make,
    end_piece.make,
    spacers.make,
    lock_pin.make,
)


def make_parts(design: Design, sizes: Sizes, stack: Stack) -> tuple[Part, ...]:
    """Every made part of the machine, each in each hand that it is needed in."""
    return tuple(part for make in GENERATORS for part in make(design, sizes, stack))
