"""Over what length pins and their holes really touch: plates less sinks, chamfers and what a pin stops short by.

One place for parts, proportions and checks. Lengths in mm; small, so never below zero.
"""

from __future__ import annotations

from parts import chain_pin, crank_pin
from parts.making import chamfer


def crank_pin_in_link(diameter: float, link_thickness: float, sink_depth: float, headed: bool) -> float:
    """Crank pin in the link's eye: under the head, or up to the chamfer of a pin that ends below the face."""
    if headed:
        return max(0.0, link_thickness - sink_depth)
    length = link_thickness - crank_pin.BELOW
    return max(0.0, length - chamfer(diameter, length))


def chain_pin_in_link(diameter: float, link_thickness: float) -> float:
    """Chain pin in the link's eye, up to its chamfer; it ends short of the disc."""
    length = link_thickness - chain_pin.SHORT
    return max(0.0, length - chamfer(diameter, length))


def pin_in_disc(diameter: float, disc_thickness: float) -> float:
    """Crank pin or post in the disc, up to its chamfer at the back."""
    return max(0.0, disc_thickness - chamfer(diameter, disc_thickness))


def stop_on_link(style: str, diameter: float, height: float, link_thickness: float, plate_gap: float) -> float:
    """Stop on the link's flank, along z: a post touches up to its chamfer, a block up to its top."""
    top = height - (chamfer(diameter, height) if style == "post" else 0.0)
    return max(0.0, min(top - plate_gap, link_thickness))
