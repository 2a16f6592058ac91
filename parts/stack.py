"""Plate stacks along z: the one place that knows what "twin" and "single" mean.

z = 0 is the middle of the chain's plane, z grows towards the viewer. Nothing but the chain pin and the chain's own end
may enter the chain's plane, so the plates stand off it on one side (single) or on both (twin).
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from parts.far_ends.base import FarEnd


@dataclass(frozen=True, slots=True)
class Side:
    """One side of the chain. ``away`` is the direction of z away from the chain: −1 behind it, +1 in front of it."""

    name: Literal["back", "front"]
    away: int

    def z(self, depth: float) -> float:
        """z of a plane that lies ``depth`` mm away from the middle of the chain's plane."""
        return self.away * depth


@dataclass(frozen=True, slots=True)
class Stack:
    """Depths (mm) from the middle of the chain's plane to each plate's face towards the chain."""

    sides: tuple[Side, ...]
    load_share: float  # of the whole load, what one side is checked for
    chain_pin_support: Literal["double shear", "cantilever"]
    crank_pin_headed: bool  # its head lies in a counterbore of the link
    chain_plane_width: float  # over pins and end block, play included
    plate_gap: float
    link_thickness: float
    disc_thickness: float

    @property
    def link_face(self) -> float:
        return self.chain_plane_width / 2

    @property
    def link_middle(self) -> float:
        return self.link_face + self.link_thickness / 2

    @property
    def disc_face(self) -> float:
        return self.link_face + self.link_thickness + self.plate_gap

    @property
    def disc_middle(self) -> float:
        return self.disc_face + self.disc_thickness / 2

    @property
    def disc_back(self) -> float:
        return self.disc_face + self.disc_thickness

    @property
    def chain_offset(self) -> float:
        """Distance (mm) from the chain's line to the link's middle that one side has to carry as a couple.

        Zero in double shear, where the two sides balance each other about the chain's plane.
        """
        return self.link_middle if self.chain_pin_support == "cantilever" else 0.0

    @property
    def pin_root_arm(self) -> float:
        """Distance (mm) from the link's middle to the disc's face, where crank pin and stop are held."""
        return self.link_thickness / 2 + self.plate_gap


def make_stack(
    kind: Literal["twin", "single"],
    load_share: float,
    far_end: FarEnd,
    end_width: float,
    plate_gap: float,
    link_thickness: float,
    disc_thickness: float,
) -> Stack:
    """The stack of a design. Lengths in mm; a single stack carries the whole load on its one side."""
    twin = kind == "twin"
    back, front = Side("back", -1), Side("front", 1)
    return Stack(
        sides=(back, front) if twin else (back,),
        load_share=load_share if twin else 1.0,
        chain_pin_support="double shear" if twin else "cantilever",
        crank_pin_headed=not twin,
        chain_plane_width=max(far_end.plane_width, end_width) + 2 * plate_gap,
        plate_gap=plate_gap,
        link_thickness=link_thickness,
        disc_thickness=disc_thickness,
    )
