"""Inertia of what turns: one function for whatever asks, from the outlines and densities of the made parts."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass, replace

import numpy as np

from parts.design import Drive, Floats
from parts.outline import Part
from parts.shape import mass_properties

LOOSE = frozenset({"lock_pin"})  # not in the machine while it turns


@dataclass(frozen=True, slots=True)
class Inertia:
    """What turns: with the disc about O, and the link with what hangs on it."""

    disc: float  # kg·mm² about O: discs, stops, crank pins
    link_mass: float  # kg: links, chain pin
    link_middle: float  # mm from A along the link to their centre of mass
    link: float  # kg·mm² about A
    drive: float | None = None  # kg·mm² at the disc, where the design gives it
    disc_first: tuple[float, float] = (0.0, 0.0)  # kg·mm, first moment of what turns with the disc, in its frame

    def about_disc(self, crank_radius: float, link_angle: Floats, rate: Floats) -> Floats:
        """What the disc's speed sees (kg·mm²), drive apart, while the link at an angle λ (rad) turns ``rate`` times as fast.

        ½ J ω² is the energy of disc and link: J = J_d + m r² − 2 m r g rate cos λ + J_A rate², g the link's centre of
        mass from A. Source: kinematics of a rigid body; the link is symmetric about its axis.
        """
        m, r = self.link_mass, crank_radius
        swing = -2.0 * m * r * self.link_middle * rate * np.cos(link_angle)
        return np.asarray(self.disc + m * r * r + swing + self.link * rate**2)

    def seated(self, crank_radius: float, seat_angle: float) -> float:
        """About the disc's axis (kg·mm²), drive apart, with the link on its stop and turning with the disc."""
        return float(self.about_disc(crank_radius, np.asarray(seat_angle), np.asarray(1.0)))

    def unbalance(self, crank_radius: float, seat_angle: float, turn: float) -> float:
        """First moment (kg·mm) about the disc's axis with the link on its stop; ``turn`` is +1 ccw, −1 cw."""
        first, way = self.link_mass * self.link_middle, math.pi + turn * seat_angle
        x = self.disc_first[0] + self.link_mass * crank_radius + first * math.cos(way)
        return math.hypot(x, self.disc_first[1] + first * math.sin(way))

    def with_tip(self, mass: float, at: float) -> Inertia:
        """With a point mass (kg) on the link, ``at`` mm from A."""
        whole = self.link_mass + mass
        middle = (self.link_mass * self.link_middle + mass * at) / whole if whole else 0.0
        return replace(self, link_mass=whole, link_middle=middle, link=self.link + mass * at * at)


def inertia_of(parts: Iterable[Part], drive: Drive | None = None) -> Inertia:
    """Inertia of the made parts from their outlines and densities; chain and chain end do not turn with the disc."""
    disc = mass = first = link = off_x = off_y = 0.0
    for part in parts:
        if part.key in LOOSE:
            continue
        own = mass_properties(part)
        for place in part.placements:
            x, y, _ = place.at
            c, s = math.cos(place.angle), math.sin(place.angle)
            gx, gy = own.center[0] * c - own.center[1] * s, own.center[0] * s + own.center[1] * c
            about = own.inertia_z + own.mass * (x * x + y * y + 2.0 * (x * gx + y * gy))
            if place.mover == "disc":
                disc += about
                off_x, off_y = off_x + own.mass * (x + gx), off_y + own.mass * (y + gy)
            elif place.mover == "link":
                mass, first, link = mass + own.mass, first + own.mass * (x + gx), link + about
    return Inertia(
        disc, mass, first / mass if mass else 0.0, link, None if drive is None else drive.inertia, (off_x, off_y)
    )
