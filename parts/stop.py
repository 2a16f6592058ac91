"""The stop on the disc that catches the link: a pressed post, or a block that is bolted and dowelled on."""

from __future__ import annotations

from parts.design import Design
from parts.fits import hole_class, shaft_class
from parts.hardening import hardness_note
from parts.making import (
    Length,
    bar_stock,
    chamfer,
    copies,
    flipped,
    plate_stock,
    polyline,
    turn_of,
    turned,
    turned_round,
)
from parts.outline import Body, Hole, Part, Plate, Turned
from parts.places import block_holes, seat_direction, stop_middle
from parts.sizes import FitSizes, Sizes, StopSizes
from parts.stack import Stack

KEY = "stop"
COLOR = (0.66, 0.33, 0.30)


def block(stop: StopSizes, turn: int, dowel_fit: str = FitSizes().dowel) -> Plate:
    """The block in its own frame: origin at its middle, x along the seated link towards the chain pin.

    ``contact_face`` looks towards the link; the corners away from it are broken.
    """
    along, across = stop.length / 2, stop.width / 2
    cut = min(stop.length, stop.width) / 10
    edge = polyline(
        (
            ((cut - along, -across), "far_face"),
            ((along - cut, -across), "chain_side_chamfer"),
            ((along, cut - across), "chain_side_end"),
            ((along, across), "contact_face"),
            ((-along, across), "crank_side_end"),
            ((-along, cut - across), "crank_side_chamfer"),
        )
    )
    holes = tuple(
        Hole(name, at, stop.dowel_diameter, hole_class(dowel_fit), "ream, dowel")
        if name.startswith("dowel")
        else Hole(name, at, stop.bolt_tapping_hole, None, f"tap {stop.bolt_thread}")
        for name, at in block_holes(stop).items()
    )
    return turned_round(Plate(edge, holes, stop.height), turn)


def post(stop: StopSizes, disc_thickness: float, away: int) -> Turned:
    """The post: a plain pin, so that the copy in front of the chain is the one behind it, shifted."""
    return turned(
        (
            Length("contact", stop.height, stop.diameter, chamfer_near=chamfer(stop.diameter, stop.height)),
            Length("press_shank", disc_thickness, stop.diameter, chamfer_far=chamfer(stop.diameter, stop.height)),
        ),
        away,
    )


def _process(is_post: bool, hard: bool) -> str:
    if is_post:
        return "turn, harden, grind" if hard else "turn, grind"
    return "cut, mill the contact face, ream, tap" + (", harden" if hard else "")


def make(design: Design, sizes: Sizes, stack: Stack) -> list[Part]:
    stop, turn = sizes.stop, turn_of(design)
    is_post = stop.style == "post"
    thickness = stop.height + (sizes.disc.thickness if is_post else 0.0)
    at = flipped(stop_middle(design, sizes), turn)
    angle = 0.0 if is_post else turn * seat_direction(design, sizes)
    parts = []
    for copy in copies(stack, False, stack.disc_face - stop.height, thickness):
        body: Body = post(stop, sizes.disc.thickness, copy.away) if is_post else block(stop, turn, sizes.fits.dowel)
        parts.append(
            Part(
                key=KEY,
                title="Stop post" if is_post else "Stop block",
                hand=copy.hand,
                away=copy.away,
                body=body,
                frame="disc",
                material=stop.material.name,
                density=stop.material.density,
                stock=bar_stock(stop.diameter, design.identity.units)
                if is_post
                else plate_stock(stop.height, design.identity.units),
                process=_process(is_post, stop.material.surface_yield is not None),
                placements=copy.placements("disc", at, angle),
                color=COLOR,
                notes=(
                    f"press shank ground to {shaft_class(sizes.fits.stop_disc)} for the disc's stop seat"
                    if is_post
                    else "dowel holes reamed together with the disc",
                    *hardness_note(stop.material, design.identity.units),
                ),
            )
        )
    return parts
