"""The design as it was written: typed, in mm, N, MPa, rad, kg, s. ``None`` is a size left to proportion."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from parts.far_ends.base import FarEnd

Floats = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Assumed:
    """A value that the design file left out. ``quantity`` tells how to show it ("length", "force", "text", …)."""

    key: str
    value: float | str
    quantity: str
    why: str


@dataclass(frozen=True, slots=True)
class Identity:
    title: str
    number: str
    revision: str
    units: Literal["metric", "us"]


@dataclass(frozen=True, slots=True)
class Mechanism:
    stack: Literal["twin", "single"]
    rotation: Literal["ccw", "cw"]
    crank_radius: float
    link_length: float
    seat_angle: float
    stop_reach: float
    hold_margin: float
    reverse: Literal["forbidden", "rated"] = "forbidden"  # running onto the stop's back: kept out, or rated for


@dataclass(frozen=True, slots=True)
class Sheave:
    center: tuple[float, float]
    pitch_radius: float
    wrap: Literal["left", "right"]
    exit_angle: float | None  # None: half a wrap, worked out with the start direction
    efficiency: float


@dataclass(frozen=True, slots=True)
class Spring:
    """Either ``table`` (two rows: draw, force; straight lines between points) or ``preload`` and ``rate``."""

    preload: float
    rate: float
    table: Floats | None  # shape (2, n)
    most_draw: float | None
    table_file: str | None = None


@dataclass(frozen=True, slots=True)
class Material:
    """``yields`` and ``ultimates``: steps of (largest thickness or diameter in mm, MPa)."""

    name: str
    kind: str
    youngs_modulus: float
    poissons_ratio: float
    density: float  # kg/m³
    yields: tuple[tuple[float, float], ...]
    ultimates: tuple[tuple[float, float], ...]
    source: str
    confirmed: bool
    surface_yield: float | None = None  # MPa, of a hardened surface
    case_depth: float | None = None  # mm; None: hardened through, or not at all

    def yield_strength(self, size: float) -> float:
        """Yield strength in MPa at a thickness or diameter in mm; the last step serves beyond the table."""
        return next((s for limit, s in self.yields if size <= limit), self.yields[-1][1])

    def ultimate_strength(self, size: float) -> float:
        """Ultimate strength in MPa at a thickness or diameter in mm; the last step serves beyond the table."""
        return next((s for limit, s in self.ultimates if size <= limit), self.ultimates[-1][1])

    def surface_strength(self, size: float) -> float:
        """Yield strength in MPa of the surface: the hardened one's, else the grade's at a size in mm."""
        return self.yield_strength(size) if self.surface_yield is None else self.surface_yield

    @property
    def largest_size(self) -> float:
        """Largest thickness or diameter (mm) that the table has."""
        return self.yields[-1][0]

    def covers(self, size: float) -> bool:
        return size <= self.largest_size


@dataclass(frozen=True, slots=True)
class DiscWish:
    outer_diameter: float | None = None
    thickness: float | None = None
    bore: float | None = None
    bolt_circle: float | None = None
    bolt_count: int | None = None
    bolt_hole: float | None = None
    bolt_phase: float | None = None
    material: Material | None = None


@dataclass(frozen=True, slots=True)
class LinkWish:
    width: float | None = None
    thickness: float | None = None
    surface_yield: float | None = None  # of a hardened flank
    case_depth: float | None = None
    material: Material | None = None


@dataclass(frozen=True, slots=True)
class StopWish:
    style: Literal["post", "block"] | None = None
    diameter: float | None = None  # post
    length: float | None = None  # block, along the link
    width: float | None = None  # block, across the link
    height: float | None = None  # both, out of the disc's face
    surface_yield: float | None = None  # of the hardened surface
    case_depth: float | None = None  # None: hardened through
    material: Material | None = None


@dataclass(frozen=True, slots=True)
class PinWish:
    diameter: float | None = None
    surface_yield: float | None = None  # of the hardened surface
    case_depth: float | None = None  # None: hardened through
    material: Material | None = None


@dataclass(frozen=True, slots=True)
class ChainEndWish:
    """Of the plate on the chain pin, be it the chain's end or a tie."""

    width: float | None = None  # along the pins
    height: float | None = None  # across
    pin_diameter: float | None = None  # of the pin that joins it to the chain
    material: Material | None = None


@dataclass(frozen=True, slots=True)
class FitsWish:
    """Fits of the joints, "H7/r6": hole class, stroke, shaft class. ``None`` is left to proportion."""

    crank_pin_disc: str | None = None
    crank_pin_link: str | None = None
    chain_pin_link: str | None = None
    chain_end: str | None = None
    stop_disc: str | None = None
    dowel: str | None = None


@dataclass(frozen=True, slots=True)
class ShaftWish:
    """One overhung main shaft; a twin stack has two of them."""

    diameter: float | None = None
    overhang: float | None = None  # from the disc's back to the middle of the first bearing
    bearing_spacing: float | None = None  # between the middles of the two bearings
    drive: Literal["flange", "key"] | None = None  # how the hub that the disc is bolted to sits on the shaft
    key_length: float | None = None
    phase_tolerance: float | None = None  # rad by which two discs may stand apart
    material: Material | None = None


@dataclass(frozen=True, slots=True)
class BearingWish:
    kind: Literal["rolling", "plain"] | None = None
    static_rating: float | None = None  # C0 of one rolling bearing
    diameter: float | None = None  # bore of a plain bush
    width: float | None = None


@dataclass(frozen=True, slots=True)
class SheavePinWish:
    diameter: float | None = None
    cheek: float | None = None  # thickness of each of the two plates that hold it
    material: Material | None = None


@dataclass(frozen=True, slots=True)
class LockPinWish:
    diameter: float | None = None
    radius: float | None = None  # from the disc axis to its holes
    material: Material | None = None


@dataclass(frozen=True, slots=True)
class Friction:
    bearing: float
    crank_pin: float
    chain_pin: float
    bearing_radius: float | None


@dataclass(frozen=True, slots=True)
class Targets:
    shock_factor: float
    load_share: float
    chain: float
    ultimate: float
    yield_: float


@dataclass(frozen=True, slots=True)
class Enclosure:
    outline: Floats | None  # (n, 2)
    above: float | None
    below: float | None
    behind: float | None
    ahead: float | None
    obstacles: tuple[Floats, ...]  # each (n, 2)


@dataclass(frozen=True, slots=True)
class Moving:
    mass: float
    payload_mass: float
    payload_leaves_at: float | None
    bumper_stiffness: float | None
    bumper_travel: float | None
    gravity: float | None  # mm/s² along the chain at the spring
    disc_speed: float | None  # rad/s
    stopped_elsewhere: bool = False  # something else stops the mass, so the chain need not
    line_stiffness: float | None = None  # N/mm: chain (rope, …), sheave mount, shaft and frame in series
    line_damping: float | None = None  # share of the critical
    sheave_mass: float | None = None  # kg
    bumper_damping: float | None = None  # share of the critical


@dataclass(frozen=True, slots=True)
class Fatigue:
    """What the study of fatigue is asked for; ``surfaces`` by what has them: plates, holes, pins."""

    shots: float
    reliability: float
    surfaces: Mapping[str, str]
    fillet_radius: float  # at the shoulders of turned pins
    chain_dynamic_strength: float | None  # the maker's, of the whole chain


@dataclass(frozen=True, slots=True)
class Drive:
    """Motor, gear, brake and encoder. ``None`` is what the file does not give; a motor has both of stall torque and free
    speed, or neither."""

    stall_torque: float | None  # N·mm at the motor's shaft, at the supply voltage
    free_speed: float | None  # rad/s of the motor's shaft
    torque_constant: float | None  # N·mm/A
    supply_voltage: float | None  # V
    reduction: float  # turns of the motor a turn of the disc
    efficiency: float  # of the gear, the motor driving
    backdriving_efficiency: float  # of the gear, the disc driving; 0: it locks itself
    holding_torque: float | None  # N·mm of a brake, at the motor's shaft
    inertia: float | None  # kg·mm², all that the drive turns, at the disc
    encoder_counts: float | None  # a turn of what it sits on
    encoder_on: Literal["disc", "motor"]
    winding_time: float | None = None  # s in which a motor that is looked for has to wind


@dataclass(frozen=True, slots=True)
class Tolerances:
    """By how much what is built may differ, ± about the drawing; ``None`` is left to the general tolerances or to practice.

    ``chance`` is that of firing at the hold which may be left.
    """

    chance: float
    samples: int
    seed: int
    distribution: Literal["normal", "uniform"]
    crank_radius: float | None = None
    link_length: float | None = None
    stop_position: float | None = None  # of the stop's contact, across the link
    link_width: float | None = None  # of the whole width
    sheave_x: float | None = None
    sheave_y: float | None = None
    tie_length: float | None = None
    output_x: float | None = None  # of the slide's point or the rocker's pivot
    output_y: float | None = None
    arm: float | None = None  # of the rocker
    draw_direction: float | None = None  # of the slide, rad
    chain_length: float | None = None
    worn_elongation: float | None = None  # share of its length at which a worn chain is taken off
    encoder_offset: float | None = None  # rad
    backlash: float | None = None  # rad of the disc, from end to end


@dataclass(frozen=True, slots=True)
class Design:
    identity: Identity
    mechanism: Mechanism
    sheave: Sheave | None  # None where the far end does not run over one
    spring: Spring
    far_end: FarEnd
    disc: DiscWish
    link: LinkWish
    stop: StopWish
    crank_pin: PinWish
    chain_pin: PinWish
    chain_end: ChainEndWish
    plate_gap: float | None
    friction: Friction
    targets: Targets
    enclosure: Enclosure | None
    moving: Moving | None
    digest: str  # SHA-256 of the values that were read, spring table included
    assumed: tuple[Assumed, ...] = field(default=())
    own_materials: tuple[Material, ...] = field(default=())
    fits: FitsWish = FitsWish()
    shaft: ShaftWish = ShaftWish()
    main_bearing: BearingWish = BearingWish()
    sheave_bearing: BearingWish = BearingWish()
    sheave_pin: SheavePinWish = SheavePinWish()
    fatigue: Fatigue | None = None
    lock_pin: LockPinWish | None = None
    tolerances: Tolerances | None = None
    drive: Drive | None = None
