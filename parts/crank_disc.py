"""The crank disc: carries crank pin and stop, is bolted to the drive's hub."""

from __future__ import annotations

from collections.abc import Sequence

from parts.design import Design
from parts.fits import hole_class
from parts.hardware import cap_screw
from parts.making import copies, plate_stock, turn_of, turned_round
from parts.marks import CLEAR, Circle, numbered, text_on_disc
from parts.outline import Counterbore, Hole, Mark, Part, Plate
from parts.places import block_holes, crank_pin, hub_bolts, lock_holes, on_disc, stop_middle
from parts.segments import circle
from parts.sizes import Sizes
from parts.stack import Stack
from parts.stop_layout import HEAD_BELOW

KEY = "crank_disc"
COLOR = (0.45, 0.52, 0.60)
LOCK_FIT = "H8"


def outline(design: Design, sizes: Sizes) -> Plate:
    """The disc in the disc frame, with everything but its number."""
    disc = sizes.disc
    pin = Hole(
        "crank_pin_hole",
        crank_pin(design),
        sizes.crank_pin.diameter,
        hole_class(sizes.fits.crank_pin_disc),
        "ream, press fit of the crank pin",
    )
    bolts = hub_bolts(disc)
    sinks = (
        tuple(
            Counterbore(f"hub_bolt_sink_{i}", at, disc.counterbore_diameter, disc.counterbore_depth, "chain")
            for i, at in enumerate(bolts, 1)
        )
        if has_sinks(sizes)
        else ()
    )
    holes = (
        Hole("bore", (0.0, 0.0), disc.bore, "H7", "bore, locating fit on the hub"),
        pin,
        *(
            Hole(f"hub_bolt_hole_{i}", at, disc.bolt_hole, None, f"drill, clearance for {disc.bolt_thread}")
            for i, at in enumerate(bolts, 1)
        ),
        *_stop_holes(design, sizes),
        *_lock_holes(sizes),
    )
    plate = Plate(
        circle((0.0, 0.0), disc.outer_diameter, "rim"),
        holes,
        disc.thickness,
        (*sinks, *_stop_sinks(design, sizes)),
        marks=_index(design, sizes),
    )
    return turned_round(plate, turn_of(design))


def has_sinks(sizes: Sizes) -> bool:
    return sizes.disc.counterbore_diameter > 0 and sizes.disc.counterbore_depth > 0


def _stop_holes(design: Design, sizes: Sizes) -> tuple[Hole, ...]:
    stop = sizes.stop
    if stop.style == "post":
        return (
            Hole(
                "stop_seat",
                stop_middle(design, sizes),
                stop.diameter,
                hole_class(sizes.fits.stop_disc),
                "ream, press fit of the stop",
            ),
        )
    return tuple(
        Hole(
            f"stop_{name}",
            on_disc(design, sizes, at),
            stop.dowel_diameter,
            hole_class(sizes.fits.dowel),
            "ream, press fit of the dowel",
        )
        if name.startswith("dowel")
        else Hole(
            f"stop_{name}",
            on_disc(design, sizes, at),
            stop.bolt_hole,
            None,
            f"drill, clearance for {stop.bolt_thread}",
        )
        for name, at in block_holes(stop).items()
    )


def _lock_holes(sizes: Sizes) -> tuple[Hole, ...]:
    lock = sizes.lock_pin
    if lock is None:
        return ()
    note = "ream, running fit of the lock pin"
    return tuple(Hole(name, at, lock.diameter, LOCK_FIT, note) for name, at in lock_holes(lock).items())


def _stop_sinks(design: Design, sizes: Sizes) -> tuple[Counterbore, ...]:
    """Sinks on the back for the heads of a block's bolts, so that the hub can seat over them."""
    stop = sizes.stop
    if stop.style == "post":
        return ()
    screw = cap_screw(stop.bolt_thread)
    depth = screw.head_height + HEAD_BELOW
    if depth >= sizes.disc.thickness:
        return ()
    return tuple(
        Counterbore(f"stop_bolt_sink_{name[-1]}", on_disc(design, sizes, at), screw.counterbore_diameter, depth, "back")
        for name, at in block_holes(stop).items()
        if name.startswith("bolt")
    )


def _index(design: Design, sizes: Sizes) -> tuple[Mark, ...]:
    """A stroke at the rim on the x axis: it points along the chain when the crank angle is zero."""
    rim = sizes.disc.outer_diameter / 2 - 0.5
    inner = max(rim - sizes.disc.outer_diameter / 20, crank_pin(design)[0] + sizes.crank_pin.diameter / 2 + CLEAR)
    return (Mark("index", strokes=(((inner, 0.0), (rim, 0.0)),)),) if rim - inner >= 1.0 else ()


def make(design: Design, sizes: Sizes, stack: Stack) -> list[Part]:
    bare = outline(design, sizes)
    parts = []

    def place(text: str, around: Sequence[Circle]) -> Mark | None:
        return text_on_disc(text, sizes.disc.outer_diameter / 2, around)

    for copy in copies(stack, has_sinks(sizes), stack.disc_face, sizes.disc.thickness):
        part = Part(
            key=KEY,
            title="Crank disc" + (f", {copy.hand}" if copy.hand else ""),
            hand=copy.hand,
            away=copy.away,
            body=bare,
            frame="disc",
            material=sizes.disc.material.name,
            density=sizes.disc.material.density,
            stock=plate_stock(sizes.disc.thickness, design.identity.units),
            process="cut, face, bore, drill, ream" + (", counterbore" if has_sinks(sizes) else ""),
            placements=copy.placements("disc", (0.0, 0.0)),
            color=COLOR,
        )
        parts.append(numbered(part, design, place))
    return parts
