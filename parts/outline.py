"""Shapes that parts are made from: plate outlines of lines and arcs with named holes, and turned profiles.

A plate's outline is the one source of its cut file and of its solid. Coordinates in mm in the part frame; the body of a
plate lies between z = 0 (the face towards the chain) and ``side.away`` times its thickness.
"""

from __future__ import annotations

from dataclasses import dataclass

Point = tuple[float, float]


@dataclass(frozen=True, slots=True)
class Line:
    start: Point
    end: Point
    name: str


@dataclass(frozen=True, slots=True)
class Arc:
    start: Point
    end: Point
    center: Point
    ccw: bool
    name: str


Segment = Line | Arc


@dataclass(frozen=True, slots=True)
class Hole:
    """A round hole through the plate, finished to ``diameter``; ``fit`` (such as "H7") makes it a hole to be finished."""

    name: str
    center: Point
    diameter: float
    fit: str | None = None
    note: str = ""  # what the shop does with it: "ream, press fit of the crank pin"


@dataclass(frozen=True, slots=True)
class Counterbore:
    """A round flat-bottomed sink. ``face`` is "chain" (z = 0) or "back"."""

    name: str
    center: Point
    diameter: float
    depth: float
    face: str


@dataclass(frozen=True, slots=True)
class Slot:
    """A slot milled right across y: everything with x ≥ ``x_from`` and ``z_from`` ≤ |z| ≤ ``z_to`` is gone."""

    name: str
    x_from: float
    z_from: float
    z_to: float


@dataclass(frozen=True, slots=True)
class Mark:
    """Etched: straight strokes, or one line of text with its lower left corner, height and direction (rad)."""

    name: str
    strokes: tuple[tuple[Point, Point], ...] = ()
    text: str = ""
    at: Point = (0.0, 0.0)
    height: float = 0.0
    direction: float = 0.0


@dataclass(frozen=True, slots=True)
class Plate:
    outline: tuple[Segment, ...]  # closed, counter-clockwise
    holes: tuple[Hole, ...]
    thickness: float
    counterbores: tuple[Counterbore, ...] = ()
    slots: tuple[Slot, ...] = ()
    marks: tuple[Mark, ...] = ()


@dataclass(frozen=True, slots=True)
class Step:
    """A cylinder of a turned part from ``z_from`` to ``z_to`` (rising), with chamfers (mm at 45°) at its two ends."""

    name: str
    z_from: float
    z_to: float
    diameter: float
    chamfer_from: float = 0.0
    chamfer_to: float = 0.0


@dataclass(frozen=True, slots=True)
class Turned:
    """Steps in order of z, each touching the next; ``bore`` runs right through (0: solid)."""

    steps: tuple[Step, ...]
    bore: float = 0.0


Body = Plate | Turned


@dataclass(frozen=True, slots=True)
class Placement:
    """Where one copy of a part sits: on which mover, where its origin is there (the mover's frame, z the machine's)."""

    mover: str  # "disc", "link", "chain_end"
    at: tuple[float, float, float]
    angle: float = 0.0  # rad, of the part's x axis in the mover's frame


@dataclass(frozen=True, slots=True)
class Part:
    """One made part, in one hand. ``frame`` tells whose axes its own are parallel to ("disc", "link" or "chain end")."""

    key: str  # "crank_disc"
    title: str  # "Crank disc"
    hand: str  # "", "back" or "front"; the viewer stands in front
    away: int  # −1: the body lies below z = 0, +1: above
    body: Body
    frame: str
    material: str
    density: float  # kg/m³
    stock: str  # "plate 20 mm", "round bar 30 mm"
    process: str  # "cut, bore", "turn, grind"
    placements: tuple[Placement, ...]
    color: tuple[float, float, float]
    notes: tuple[str, ...] = ()

    @property
    def name(self) -> str:
        return f"{self.key}_{self.hand}" if self.hand else self.key

    @property
    def quantity(self) -> int:
        return len(self.placements)
