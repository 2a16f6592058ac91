"""What a design may name: the listed chains, ropes, slings and materials; the tables themselves are the next room's."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from parts.design import Material


@dataclass(frozen=True, slots=True)
class Rope:
    """A wire rope: mm, N at the rope grades 1770 and 1960, kg/m."""

    construction: str
    diameter: float
    breaking_force_1770: float
    breaking_force_1960: float
    mass_per_metre: float
    least_sheave_ratio: float
    source: str
    confirmed: bool
    from_memory: tuple[str, ...]

    @property
    def designation(self) -> str:
        return f"{self.construction} {self.diameter:g}"


@dataclass(frozen=True, slots=True)
class RopeEnd:
    """How a rope ends; ``efficiency`` is the share of its breaking force that the end carries.

    The eye's sizes are in rope diameters: its width over the fitting along the pin, its height, and the pin's largest.
    """

    name: str
    efficiency: float
    width: float
    height: float
    pin: float
    source: str
    confirmed: bool


@dataclass(frozen=True, slots=True)
class Webbing:
    """A flat woven sling: mm, kg straight, N."""

    width: float
    thickness: float
    working_load: float
    breaking_force: float
    source: str
    confirmed: bool

    @property
    def designation(self) -> str:
        return f"polyester webbing {self.width:g}"


@dataclass(frozen=True, slots=True)
class Catalogue:
    """``chains``: designation to the row of the table, lengths in mm, strengths in N, masses a metre in kg."""

    chains: Mapping[str, Mapping[str, object]]
    materials: Mapping[str, Material]
    ropes: Mapping[str, Rope] = field(default_factory=dict)
    rope_ends: Mapping[str, RopeEnd] = field(default_factory=dict)
    webbings: Mapping[str, Webbing] = field(default_factory=dict)
    sheave_ratio_of_webbing: float = 10.0
