"""The crank pin: pressed into the disc, the link turns on it. It never stands proud of the link's chain face."""

from __future__ import annotations

from parts.design import Design
from parts.fits import shaft_class
from parts.hardening import hardness_note
from parts.making import Length, bar_stock, chamfer, copies, flipped, turn_of, turned
from parts.outline import Part, Turned
from parts.places import crank_pin
from parts.sizes import Sizes
from parts.stack import Stack

KEY = "crank_pin"
COLOR = (0.80, 0.74, 0.45)
BELOW = 0.5  # mm that a pin without a head ends below the link's chain face
HEAD_BELOW = 0.2  # mm that a head lies below it at least
PLAY = 0.1  # mm of end play between head and sink


def head_top(sizes: Sizes) -> float:
    """Depth in mm of the head's top below the link's chain face."""
    return max(HEAD_BELOW, sizes.link.counterbore_depth - sizes.crank_pin.head_thickness - PLAY)


def lengths(sizes: Sizes, stack: Stack) -> tuple[float, tuple[Length, ...]]:
    """Depth below the link's chain face at which the pin begins, and its stretches from there."""
    pin = sizes.crank_pin
    to_disc = sizes.link.thickness + stack.plate_gap
    shank = Length(
        "press_shank",
        sizes.disc.thickness,
        pin.diameter,
        chamfer_far=chamfer(pin.diameter, sizes.disc.thickness),
    )
    if not stack.crank_pin_headed:
        journal = to_disc - BELOW
        near = shank.chamfer_far  # like the other end: the pin can be put in either way round
        return BELOW, (Length("journal", journal, pin.diameter, chamfer_near=min(near, journal / 2)), shank)
    top, bottom = head_top(sizes), sizes.link.counterbore_depth - PLAY
    head = Length("head", bottom - top, pin.head_diameter, chamfer_near=min(0.5, (bottom - top) / 4))
    return top, (head, Length("journal", to_disc - bottom, pin.diameter), shank)


def profile(sizes: Sizes, stack: Stack, away: int) -> Turned:
    """The pin with z = 0 at its end towards the chain."""
    return turned(lengths(sizes, stack)[1], away)


def make(design: Design, sizes: Sizes, stack: Stack) -> list[Part]:
    begin, pieces = lengths(sizes, stack)
    pin, at = sizes.crank_pin, flipped(crank_pin(design), turn_of(design))
    return [
        Part(
            key=KEY,
            title="Crank pin" + (f", {copy.hand}" if copy.hand else ""),
            hand=copy.hand,
            away=copy.away,
            body=profile(sizes, stack, copy.away),
            frame="disc",
            material=pin.material.name,
            density=pin.material.density,
            stock=bar_stock(max(p.diameter for p in pieces), design.identity.units),
            process="turn, harden, grind",
            placements=copy.placements("disc", at),
            color=COLOR,
            notes=(
                f"press shank ground to {shaft_class(sizes.fits.crank_pin_disc)} for the disc, "
                f"journal to {shaft_class(sizes.fits.crank_pin_link)} for the link",
                *hardness_note(pin.material, design.identity.units),
            ),
        )
        for copy in copies(stack, stack.crank_pin_headed, stack.link_face + begin, sum(p.length for p in pieces))
    ]
