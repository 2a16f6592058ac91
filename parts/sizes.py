"""Every size of the machine settled: what the parts are made from. Lengths in mm, angles in rad."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from parts.design import Material


@dataclass(frozen=True, slots=True)
class DiscSizes:
    outer_diameter: float
    thickness: float
    bore: float
    bolt_circle: float
    bolt_count: int
    bolt_hole: float
    bolt_phase: float  # of the first bolt, from the disc frame's x axis, in the direction of rotation
    bolt_thread: str  # "M8"
    counterbore_diameter: float
    counterbore_depth: float
    material: Material


@dataclass(frozen=True, slots=True)
class LinkSizes:
    width: float
    thickness: float
    counterbore_diameter: float  # 0: none
    counterbore_depth: float
    material: Material


@dataclass(frozen=True, slots=True)
class StopSizes:
    style: Literal["post", "block"]
    diameter: float  # post
    length: float  # block, along the link
    width: float  # block, across the link
    height: float  # out of the disc's face
    dowel_diameter: float  # block
    bolt_thread: str  # block
    bolt_hole: float  # block: clearance hole in the disc
    bolt_tapping_hole: float  # block: hole in the block
    material: Material


@dataclass(frozen=True, slots=True)
class CrankPinSizes:
    diameter: float
    head_diameter: float  # 0: no head
    head_thickness: float
    material: Material


@dataclass(frozen=True, slots=True)
class ChainPinSizes:
    diameter: float  # journal in the link's eye
    middle_diameter: float  # where the chain end sits
    collar_diameter: float  # single stack: collar that sets the chain end off from the link
    groove_diameter: float  # single stack: retaining ring
    groove_width: float
    groove_edge: float  # from the groove to the pin's end
    material: Material


@dataclass(frozen=True, slots=True)
class ChainEndSizes:
    width: float  # along the pins
    height: float  # across the chain
    length: float  # between its two holes
    pin_diameter: float  # of the chain's own pin
    tongue_width: float  # roller chain: the tongue between the plates; leaf chain: each finger
    slots: tuple[tuple[float, float], ...]  # leaf chain: (from, to) across the width, from its middle
    slot_depth: float  # from the chain side
    material: Material


@dataclass(frozen=True, slots=True)
class Sizes:
    plate_gap: float  # between disc and link, and play each side of the chain's plane
    disc: DiscSizes
    link: LinkSizes
    stop: StopSizes
    crank_pin: CrankPinSizes
    chain_pin: ChainPinSizes
    chain_end: ChainEndSizes
