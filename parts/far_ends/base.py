"""What leads from the chain pin to the spring: one record with one interface, whatever it is made of.

``FarEnd`` is what every kind has; each kind is a file of this package that adds what only it has, and a line in
``KINDS``. How it moves, and what it bears, is told in ``loads.far_ends`` under the same name.
"""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import dataclass
from typing import ClassVar, Literal

Units = Literal["metric", "us"]
PRACTICE = "common practice, no source"


@dataclass(frozen=True, slots=True)
class EndForm:
    """What a far end asks of the plate on the chain pin that it begins with. Lengths in mm."""

    width: float  # along the pins
    why: str
    tongue: float  # of the plate, where the far end takes hold of it; as wide as the plate where it takes all of it
    slots: tuple[tuple[float, float], ...]  # (from, to) as distances from the plate's middle, both sides alike
    reach: float  # from the far hole back to where the far end's own body ends, and of its pin's diameter as much:
    reach_of_pin: float
    step: float  # what the length between the two holes is a multiple of
    least_height: float = 0.0


@dataclass(frozen=True, kw_only=True)
class FarEnd(ABC):
    """Widths are along the pins, strength is of the whole (all strands, its ends included). mm, N, kg/m."""

    table: ClassVar[str]  # of the design file
    part: ClassVar[str] = "chain_end"  # key of the made part on the chain pin
    far_hole: ClassVar[str] = "chain_hole"  # the part's other hole
    width_key: ClassVar[str] = "width"  # of that part along the pins, in its table
    over_sheave: ClassVar[bool] = True
    usual_factor: ClassVar[tuple[float, str]] = (5.0, PRACTICE)  # breaking strength over load, and why

    # pull at which it would be stretched to double its length (E A), over its breaking strength
    stretch: ClassVar[tuple[float, str]] = (60.0, PRACTICE)

    designation: str
    min_tensile_strength: float
    mass_per_metre: float | None
    slack: float
    source: str
    confirmed: bool
    run_to_spring: float | None = None  # from where it leaves the sheave to its last pin, at zero draw

    @property
    def noun(self) -> str:
        """What it is called: also the part's name of what is bought."""
        return self.table

    @property
    @abstractmethod
    def plane_width(self) -> float:
        """What it takes up of the chain's plane along the pins."""

    @property
    @abstractmethod
    def height(self) -> float:
        """Across, in the plane of the disc, where it is highest."""

    @property
    def pin_diameter(self) -> float:
        """Of the pin that joins it to the plate on the chain pin; 0 where the proportions settle it."""
        return 0.0

    @property
    def thickness_on_sheave(self) -> float:
        """How far it stands out on both sides of the pitch line together."""
        return self.height

    @property
    def usual_sheave(self) -> tuple[float, str]:
        """Pitch radius (mm) of the sheave where the design gives none, and why."""
        return 0.0, ""

    @property
    def grain(self) -> float | None:
        """The least by which its length can be changed by taking some of it out; None where it is cut to length."""
        return None

    @property
    def tongues(self) -> bool:
        """Whether it takes hold of the plate by tongues that fill its room."""
        return False

    @property
    def length_of_plate(self) -> float:
        """Between the plate's two holes, mm, where the far end sets it; 0 where the proportions do."""
        return 0.0

    @property
    def strands_note(self) -> str:
        """How many of it run side by side, for the parts list; empty where there is one."""
        return ""

    def output_note(self, units: Units) -> str:
        """What its output is, for the parts list, where it does not run over a sheave."""
        return ""

    @property
    def pin_note(self) -> str:
        """Of the pin that joins it to the plate, as it goes on after "the pin"."""
        return f"of the {self.noun}'s own"

    def pin_span(
        self, width: float, slots: tuple[tuple[float, float], ...], gap: float
    ) -> tuple[float, float, float] | None:
        """Outer plates, inner plate and gap (mm) about the pin that joins it to the plate, ``width`` wide with ``slots``.

        None where the pin is its own and its strength is in that of the whole.
        """
        return None

    @abstractmethod
    def end_form(self) -> EndForm:
        """The plate that it takes hold of."""
