"""Where every copy of every part stands when the machine is in a given position.

Positions come in as plain numbers or arrays in the machine frame; nothing here knows the mechanics. mm and rad.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from parts.design import Design, Floats
from parts.outline import Part


class Frame(NamedTuple):
    """A moving frame, seen from the machine: origin and direction of its x axis, as numbers or arrays."""

    x: Floats
    y: Floats
    rotation: Floats


@dataclass(frozen=True, slots=True)
class Pose:
    """The movers' frames, in one position or in many."""

    disc: Frame
    link: Frame
    chain_end: Frame

    def of(self, mover: str) -> Frame:
        """The frame of a mover: "disc", "link", "chain_end", or "machine", which stands still."""
        if mover == "machine":
            still = np.zeros_like(self.disc.rotation)
            return Frame(still, still, still)
        found: Frame = {"disc": self.disc, "link": self.link, "chain_end": self.chain_end}[mover]
        return found


class PlacedPart(NamedTuple):
    """One copy of a part: a name of its own, and x, y, z of its origin and the direction of its x axis."""

    part: Part
    name: str
    at: tuple[float, float, float, float]


def pose(design: Design, disc_angle: Floats | float, link_angle: Floats | float, chain_angle: Floats | float) -> Pose:
    """The movers' frames from three machine-frame directions (rad, counter-clockwise positive).

    ``disc_angle`` is the direction O→A, ``link_angle`` A→B, ``chain_angle`` from the chain pin along the chain.
    """
    disc, link, chain = np.broadcast_arrays(
        *(np.asarray(a, dtype=np.float64) for a in (disc_angle, link_angle, chain_angle))
    )
    r, length = design.mechanism.crank_radius, design.mechanism.link_length
    ax, ay = np.asarray(r * np.cos(disc)), np.asarray(r * np.sin(disc))
    bx, by = ax + length * np.cos(link), ay + length * np.sin(link)
    still = np.zeros_like(disc)
    return Pose(Frame(still, still, disc), Frame(ax, ay, link), Frame(bx, by, chain))


def occurrences(part: Part) -> tuple[str, ...]:
    """A name for each copy: the part's own where there is one, else with a number."""
    if part.quantity == 1:
        return (part.name,)
    return tuple(f"{part.name}_{i}" for i in range(1, part.quantity + 1))


def placed(parts: Iterable[Part], at: Pose) -> list[PlacedPart]:
    """Every copy of every part, in one position."""
    found = []
    for part in parts:
        for name, place in zip(occurrences(part), part.placements, strict=True):
            x0, y0, rotation = (float(v) for v in at.of(place.mover))
            c, s = np.cos(rotation), np.sin(rotation)
            x, y, z = place.at
            where = (float(x0 + c * x - s * y), float(y0 + s * x + c * y), z, rotation + place.angle)
            found.append(PlacedPart(part, name, where))
    return found


def matrix(at: tuple[float, float, float, float]) -> Floats:
    """The 4 × 4 transform of a placed part, from its frame to the machine's (mm)."""
    x, y, z, rotation = at
    c, s = np.cos(rotation), np.sin(rotation)
    return np.array([[c, -s, 0.0, x], [s, c, 0.0, y], [0.0, 0.0, 1.0, z], [0.0, 0.0, 0.0, 1.0]])
