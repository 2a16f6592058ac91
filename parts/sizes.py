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
class FitSizes:
    """The fit of each joint, hole class and shaft class: "H7/r6"."""

    crank_pin_disc: str = "H7/r6"
    crank_pin_link: str = "H8/f7"
    chain_pin_link: str = "H7/r6"
    chain_end: str = "H8/f7"
    stop_disc: str = "H7/r6"
    dowel: str = "H7/m6"


@dataclass(frozen=True, slots=True)
class ShaftSizes:
    """One overhung main shaft; a twin stack has two."""

    diameter: float
    overhang: float  # from the disc's back to the middle of the first bearing
    bearing_spacing: float
    drive: Literal["flange", "key"]
    key_width: float  # 0: no key
    key_height: float
    key_seat: float  # depth of the keyway in the shaft
    key_length: float
    phase_tolerance: float  # rad between two discs; 0 where there is one
    material: Material


@dataclass(frozen=True, slots=True)
class BearingSizes:
    kind: Literal["rolling", "plain"]
    static_rating: float  # C0 in N; 0 for a plain bush
    diameter: float  # bore of a plain bush; 0 for a rolling bearing
    width: float


@dataclass(frozen=True, slots=True)
class SheavePinSizes:
    diameter: float
    cheek: float  # thickness of each plate that holds it
    hub: float  # width of the sheave on it
    gap: float  # between sheave and cheek
    material: Material


@dataclass(frozen=True, slots=True)
class Running:
    """What turns the disc and leads the chain. None of it is made here; it is sized for the loads."""

    shaft: ShaftSizes
    main_bearing: BearingSizes
    sheave_bearing: BearingSizes | None  # None, as the pin, where the far end does not run over a sheave
    sheave_pin: SheavePinSizes | None


@dataclass(frozen=True, slots=True)
class LockPinSizes:
    """One pin and its two holes in the disc, at angles in the disc frame of a ccw machine (rad)."""

    diameter: float
    radius: float
    start_angle: float
    hold_angle: float
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
    fits: FitSizes = FitSizes()
    running: Running | None = None
    lock_pin: LockPinSizes | None = None
