"""The plate on the chain pin, alone in the chain's plane: the end that takes hold of chain, rope or webbing, or a tie."""

from __future__ import annotations

from parts.design import Design
from parts.far_ends.base import FarEnd
from parts.fits import hole_class
from parts.making import plate_stock, turn_of, turned_round
from parts.outline import Arc, Hole, Line, Part, Placement, Plate, Slot
from parts.sizes import ChainEndSizes, Sizes
from parts.stack import Stack

COLOR = (0.48, 0.44, 0.62)
FAR_FIT = "H8"  # of the far hole, for a pin that goes through by hand
TITLES = {"chain_end": "Chain end", "tie": "Tie"}


def slots(end: ChainEndSizes) -> tuple[Slot, ...]:
    """Slots for what takes hold of it, open at that side; a roller chain's tongue is relieved on both sides."""
    tip = end.length + end.height / 2
    begin = tip - (end.slot_depth or end.height)
    ranges = [(max(low, 0.0), high) for low, high in end.slots if high > 0]
    if not ranges and 0 < end.tongue_width < end.width:
        ranges = [(end.tongue_width / 2, end.width / 2)]
    return tuple(Slot(f"plate_slot_{i}", begin, low, high) for i, (low, high) in enumerate(ranges, 1))


def outline(far_end: FarEnd, sizes: Sizes) -> Plate:
    """The plate: origin at the chain pin, x along the chain towards the sheave, or along the tie to the output."""
    end, half = sizes.chain_end, sizes.chain_end.height / 2
    edge = (
        Line((0.0, -half), (end.length, -half), "lower_flank"),
        Arc((end.length, -half), (end.length, half), (end.length, 0.0), True, "chain_side_arc"),
        Line((end.length, half), (0.0, half), "upper_flank"),
        Arc((0.0, half), (0.0, -half), (0.0, 0.0), True, "pin_side_arc"),
    )
    holes = (
        Hole(
            "chain_pin_eye",
            (0.0, 0.0),
            sizes.chain_pin.middle_diameter,
            hole_class(sizes.fits.chain_end),
            "bore, running fit on the chain pin",
        ),
        Hole(far_end.far_hole, (end.length, 0.0), end.pin_diameter, FAR_FIT, f"bore, for the pin {far_end.pin_note}"),
    )
    return Plate(edge, holes, end.width, slots=slots(end))


def make(design: Design, sizes: Sizes, stack: Stack) -> list[Part]:
    end, far = sizes.chain_end, design.far_end
    body = turned_round(outline(far, sizes), turn_of(design))
    return [
        Part(
            key=far.part,
            title=TITLES[far.part],
            hand="",
            away=-1,
            body=body,
            frame="chain end",
            material=end.material.name,
            density=end.material.density,
            stock=plate_stock(end.width, design.identity.units),
            process="cut, bore, ream" + (", mill the slots" if body.slots else ""),
            placements=(Placement("chain_end", (0.0, 0.0, end.width / 2)),),
            color=COLOR,
        )
    ]
