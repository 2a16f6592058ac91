"""The swing link: hangs on the crank pin, carries the chain pin, is caught by the stop on its straight flank."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from parts.design import Design
from parts.fits import hole_class
from parts.hardening import hardness_note
from parts.making import copies, plate_stock, turn_of, turned_round
from parts.marks import CLEAR, Circle, numbered, text_on_strip
from parts.outline import Arc, Counterbore, Hole, Line, Mark, Part, Plate
from parts.sizes import Sizes
from parts.stack import Stack

KEY = "swing_link"
COLOR = (0.72, 0.55, 0.38)


def outline(design: Design, sizes: Sizes, stack: Stack) -> Plate:
    """The link in the link frame (origin at the crank pin, x towards the chain pin), with everything but its number."""
    length, half = design.mechanism.link_length, sizes.link.width / 2
    edge = (
        Line((0.0, -half), (length, -half), "stop_flank"),
        Arc((length, -half), (length, half), (length, 0.0), True, "chain_end_arc"),
        Line((length, half), (0.0, half), "back_flank"),
        Arc((0.0, half), (0.0, -half), (0.0, 0.0), True, "crank_end"),
    )
    held = "press" if stack.chain_pin_support == "cantilever" else "close"
    holes = (
        Hole(
            "crank_pin_eye",
            (0.0, 0.0),
            sizes.crank_pin.diameter,
            hole_class(sizes.fits.crank_pin_link),
            "bore, running fit on the crank pin",
        ),
        Hole(
            "chain_pin_eye",
            (length, 0.0),
            sizes.chain_pin.diameter,
            hole_class(sizes.fits.chain_pin_link),
            f"bore, {held} fit of the chain pin",
        ),
    )
    sinks = (
        (
            Counterbore(
                "crank_pin_head_sink",
                (0.0, 0.0),
                sizes.link.counterbore_diameter,
                sizes.link.counterbore_depth,
                "chain",
            ),
        )
        if has_sink(sizes, stack)
        else ()
    )
    plate = Plate(edge, holes, sizes.link.thickness, sinks, marks=_arrow(design, half))
    return turned_round(plate, turn_of(design))


def has_sink(sizes: Sizes, stack: Stack) -> bool:
    return stack.crank_pin_headed and sizes.link.counterbore_diameter > 0 and sizes.link.counterbore_depth > 0


def _arrow(design: Design, half: float) -> tuple[Mark, ...]:
    """An arrow at the stop's reach that points at the flank which meets the stop."""
    x, tip = design.mechanism.stop_reach, CLEAR - half
    size = min(0.45 * half, 8.0)
    if size < 2.0:
        return ()
    barb = size / 3
    ends = ((x, tip + size), (x - barb, tip + barb), (x + barb, tip + barb))
    return (Mark("stop_side", strokes=tuple(((x, tip), end) for end in ends)),)


def _fits(mark: Mark, plate: Plate) -> bool:
    """Whether a mark's strokes keep clear of the plate's holes."""
    features: list[Hole | Counterbore] = [*plate.holes, *plate.counterbores]
    return all(
        (x - h.center[0]) ** 2 + (y - h.center[1]) ** 2 >= (h.diameter / 2 + CLEAR) ** 2
        for stroke in mark.strokes
        for x, y in stroke
        for h in features
    )


def make(design: Design, sizes: Sizes, stack: Stack) -> list[Part]:
    bare = outline(design, sizes, stack)
    bare = replace(bare, marks=tuple(m for m in bare.marks if _fits(m, bare)))
    handed = has_sink(sizes, stack)
    parts = []

    def place(text: str, around: Sequence[Circle]) -> Mark | None:
        return text_on_strip(text, design.mechanism.link_length, sizes.link.width / 2, around)

    for copy in copies(stack, handed, stack.link_face, sizes.link.thickness):
        part = Part(
            key=KEY,
            title="Swing link" + (f", {copy.hand}" if copy.hand else ""),
            hand=copy.hand,
            away=copy.away,
            body=bare,
            frame="link",
            material=sizes.link.material.name,
            density=sizes.link.material.density,
            stock=plate_stock(sizes.link.thickness, design.identity.units),
            process="cut, mill the stop flank, bore, ream" + (", counterbore" if handed else ""),
            placements=copy.placements("link", (0.0, 0.0)),
            color=COLOR,
            notes=tuple(f"stop flank {note}" for note in hardness_note(sizes.link.material, design.identity.units)),
        )
        parts.append(numbered(part, design, place))
    return parts
