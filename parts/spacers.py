"""Rings that the stack needs: between disc and link on the crank pin, and beside the chain end on the chain pin."""

from __future__ import annotations

from parts.design import Design
from parts.making import Length, bar_stock, copies, flipped, spacer_material, turn_of, turned
from parts.outline import Part
from parts.places import crank_pin
from parts.sizes import Sizes
from parts.stack import Stack

CRANK_KEY = "crank_spacer"
CHAIN_KEY = "chain_spacer"
COLOR = (0.62, 0.66, 0.70)
LOOSE = 0.2  # mm on the bore
END_PLAY = 0.1  # mm along the pin
WIDE = 1.6  # outer diameter over pin diameter
LEAST_WALL = 1.5  # mm
WORTH = 0.5  # mm of room beyond the gap under which the chain end needs no ring to centre it


def _ring(
    design: Design,
    key: str,
    title: str,
    bore: float,
    outer: float,
    depth: float,
    thickness: float,
    stack: Stack,
    mover: str,
    at: tuple[float, float],
) -> list[Part]:
    material, density = spacer_material()
    return [
        Part(
            key=key,
            title=title,
            hand="",
            away=copy.away,
            body=turned((Length("ring", thickness, outer),), copy.away, bore=bore),
            frame=mover,
            material=material,
            density=density,
            stock=bar_stock(outer, design.identity.units),
            process="turn, part off",
            placements=copy.placements(mover, at),
            color=COLOR,
        )
        for copy in copies(stack, False, depth, thickness)
    ]


def crank_spacers(design: Design, sizes: Sizes, stack: Stack) -> list[Part]:
    """One on each crank pin, between disc and link."""
    thickness = stack.plate_gap - END_PLAY
    if thickness <= 0:
        return []
    pin = sizes.crank_pin.diameter
    depth = stack.disc_face - stack.plate_gap + END_PLAY / 2
    at = flipped(crank_pin(design), turn_of(design))
    return _ring(
        design, CRANK_KEY, "Spacer, disc to link", pin + LOOSE, WIDE * pin, depth, thickness, stack, "disc", at
    )


def chain_spacers(design: Design, sizes: Sizes, stack: Stack) -> list[Part]:
    """One each side of the chain end, where it is much narrower than the chain's plane and no collar sets it off."""
    end, pin = sizes.chain_end, sizes.chain_pin
    room = (stack.chain_plane_width - end.width) / 2
    if stack.chain_pin_support == "cantilever" or room <= stack.plate_gap + WORTH:
        return []
    bore = pin.middle_diameter + LOOSE
    # wide enough to bear on, and clear of the plates at the chain's end
    clear = 2 * (end.length - design.far_end.height / 2) - 1.0
    outer = max(bore + 2 * LEAST_WALL, min(WIDE * pin.middle_diameter, end.height, clear))
    depth = end.width / 2 + END_PLAY / 2
    at = (design.mechanism.link_length, 0.0)
    return _ring(design, CHAIN_KEY, "Spacer, link to chain end", bore, outer, depth, room - END_PLAY, stack, "link", at)


def make(design: Design, sizes: Sizes, stack: Stack) -> list[Part]:
    return crank_spacers(design, sizes, stack) + chain_spacers(design, sizes, stack)
