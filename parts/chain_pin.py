"""The chain pin: carried by the link or links, carries the chain end in the chain's plane.

Its part frame has z = 0 in the middle of the chain's plane.
"""

from __future__ import annotations

from parts.design import Design
from parts.fits import shaft_class
from parts.hardening import hardness_note
from parts.making import Length, bar_stock, chamfer, turned
from parts.outline import Part, Placement, Turned
from parts.sizes import Sizes
from parts.stack import Stack

KEY = "chain_pin"
COLOR = (0.55, 0.65, 0.50)
SHORT = 0.5  # mm that the pin ends short of a link's face towards the disc, so that it never rubs there
PLAY = 0.2  # mm each side of the chain end


def side_play(sizes: Sizes, stack: Stack) -> float:
    """Play in mm that a collar leaves on each side of the chain end."""
    return min(PLAY, (stack.chain_plane_width - sizes.chain_end.width) / 8)


def _in_double_shear(sizes: Sizes, stack: Stack) -> tuple[float, tuple[Length, ...]]:
    pin, seat = sizes.chain_pin, stack.link_thickness - SHORT
    edge = chamfer(pin.diameter, seat)
    middle = Length("middle", stack.chain_plane_width, pin.middle_diameter)
    first = Length("journal_1", seat, pin.diameter, chamfer_near=edge)
    last = Length("journal_2", seat, pin.diameter, chamfer_far=edge)
    return -stack.link_face - seat, (first, middle, last)


def _cantilevered(sizes: Sizes, stack: Stack) -> tuple[float, tuple[Length, ...]]:
    pin, play = sizes.chain_pin, side_play(sizes, stack)
    inner = sizes.chain_end.width / 2 + play
    seat = stack.link_thickness - SHORT
    stretches = (
        Length("end_stub", pin.groove_edge, pin.middle_diameter, chamfer_near=min(0.5, pin.groove_edge / 3)),
        Length("ring_groove", pin.groove_width, pin.groove_diameter),
        Length("journal", 2 * inner, pin.middle_diameter),
        Length("collar", stack.link_face - inner, pin.collar_diameter),
        Length("press_seat", seat, pin.diameter, chamfer_far=chamfer(pin.diameter, seat)),
    )
    return -inner - pin.groove_width - pin.groove_edge, stretches


_LENGTHS = {"double shear": _in_double_shear, "cantilever": _cantilevered}


def profile(sizes: Sizes, stack: Stack) -> Turned:
    begin, stretches = _LENGTHS[stack.chain_pin_support](sizes, stack)
    return turned(stretches, stack.sides[0].away, start=begin)


def make(design: Design, sizes: Sizes, stack: Stack) -> list[Part]:
    pin, body = sizes.chain_pin, profile(sizes, stack)
    return [
        Part(
            key=KEY,
            title="Chain pin",
            hand="",
            away=stack.sides[0].away,
            body=body,
            frame="link",
            material=pin.material.name,
            density=pin.material.density,
            stock=bar_stock(max(s.diameter for s in body.steps), design.identity.units),
            process="turn, harden, grind",
            placements=(Placement("link", (design.mechanism.link_length, 0.0, 0.0)),),
            color=COLOR,
            notes=(
                f"ground to {shaft_class(sizes.fits.chain_pin_link)} for the link, "
                f"to {shaft_class(sizes.fits.chain_end)} for the chain end",
                *hardness_note(pin.material, design.identity.units),
            ),
        )
    ]
