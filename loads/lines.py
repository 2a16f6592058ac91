"""The line on which the chain pin is pulled, whatever pulls it: over a sheave, or by a tie to an output that is guided.

All in the chain frame of ``loads.linkage``; arrays have the designs' leading axes (...), once expanded a last one for
the crank angles. A new kind of line is a subclass of ``FarLine`` and of ``Line``.
"""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import dataclass, fields, replace
from functools import cached_property
from typing import Any, Self

import numpy as np

from parts.design import Floats


@dataclass(frozen=True)  # without slots, so that what is asked for twice is worked out once
class Line(ABC):
    """The line from a point Q that the crank carries, shaped like the crank angle."""

    qx: Floats
    qy: Floats
    ux: Floats  # unit vector from Q the way it is pulled
    uy: Floats

    @cached_property
    def direction(self) -> Floats:
        """φ, rad from the start direction."""
        return np.arctan2(self.uy, self.ux)

    @property
    def arm(self) -> Floats:
        """Signed distance (mm) from O to the line: crank torque over tension."""
        return self.ux * self.qy - self.uy * self.qx

    @property
    @abstractmethod
    def pull(self) -> Floats:
        """p, mm by which the spring's end has been drawn since θ = 0."""

    @property
    @abstractmethod
    def turning(self) -> Floats:
        """dφ/dθ."""

    @property
    @abstractmethod
    def gearing(self) -> Floats | float:
        """Tension over the spring's force, without friction: dp/dθ over the arm."""

    @property
    def closing(self) -> Floats | float:
        """Cosine of the angle between the line and the way of what it pulls; 1 where that is led along the line."""
        return 1.0

    @property
    @abstractmethod
    def free_length(self) -> Floats:
        """mm from Q to where the line ends: at the sheave, or at the output's pin."""


@dataclass(frozen=True)
class FarLine(ABC):
    """What a far end's lines are drawn from; every field is an array shaped like the machines."""

    def expanded(self) -> Self:
        """The same with one more trailing axis, to meet crank angles of shape (..., n)."""
        return self._each(lambda value: value[..., None])

    def chunk(self, rows: slice) -> Self:
        return self._each(lambda value: value[rows])

    def copies(self, shape: tuple[int, ...]) -> Self:
        """One machine's as those of many alike."""
        return self._each(lambda value: np.broadcast_to(value, shape))

    def _each(self, change: Any) -> Self:
        return type(self)(*(change(getattr(self, f.name)) for f in fields(self)))

    @abstractmethod
    def mirrored(self) -> Self:
        """The same as seen in a mirror along the chain line, as a machine that is run backwards has it."""

    @abstractmethod
    def line(self, crank_radius: Floats, qx: Floats, qy: Floats, taken: Floats | float, link: Floats) -> Line:
        """From Q; ``link`` is the link's length and ``taken`` how much of it lies between Q and the chain pin, on the
        line: all of it while the link is free and Q the crank pin, nothing while Q is the chain pin itself."""

    @property
    @abstractmethod
    def spring_direction(self) -> Floats:
        """Where the spring pulls its end, rad in the chain frame."""

    @abstractmethod
    def wrap(self, line: Line) -> Floats:
        """Angle (rad) of what lies on a sheave; NaN where there is none."""

    @abstractmethod
    def rubbing(self, line: Line, tension: Floats, force: Floats) -> Floats:
        """Couple (N·mm, along z of the chain frame) that friction leaves on what guides the far end."""


# ---------------------------------------------------------------------------------------------- over a sheave


@dataclass(frozen=True)
class SheaveLine(Line):
    """Tangent from Q to the pitch circle."""

    straight: Floats  # t, mm from Q to the tangent point
    gain: Floats  # t² − t0², mm²
    distance: Floats  # t0
    offset: Floats  # w R
    added: Floats | float  # crank radius and what of the link is seated on the disc

    @cached_property
    def pull(self) -> Floats:
        """ℓ(Q) − ℓ(A at θ = 0), ℓ the length to the tangent point and on over the sheave, and what the link adds."""
        straight = self.gain / (self.straight + self.distance)
        return np.asarray(straight + self.added + self.offset * self.direction)

    @property
    def turning(self) -> Floats:
        return -(self.ux * self.qx + self.uy * self.qy) / self.straight

    @property
    def gearing(self) -> Floats | float:
        return 1.0

    @property
    def free_length(self) -> Floats:
        return self.straight


@dataclass(frozen=True)
class SheaveRun(FarLine):
    """Chain, rope or webbing over a sheave that stands at (distance, −wrap_side · pitch_radius)."""

    distance: Floats  # t0, along the chain line from O to the tangent point, mm
    pitch_radius: Floats
    wrap_side: Floats  # w: +1 on the left of O→C when the disc turns counter-clockwise, −1 on the right
    start_wrap: Floats  # arc on the sheave at the start, rad

    def line(self, crank_radius: Floats, qx: Floats, qy: Floats, taken: Floats | float, link: Floats) -> SheaveLine:
        t0, side = self.distance, self.pitch_radius * self.wrap_side
        dx, dy = t0 - qx, -side - qy
        # t² − t0², written so that a sheave ten kilometres away costs no digits
        gain = qx**2 + qy**2 - 2.0 * (t0 * qx - side * qy)
        with np.errstate(invalid="ignore"):
            t = np.sqrt(t0**2 + gain)
        squared = dx**2 + dy**2
        ux, uy = (dx * t - dy * side) / squared, (dy * t + dx * side) / squared
        return SheaveLine(qx, qy, ux, uy, t, gain, t0, side, crank_radius + (link - taken))

    def mirrored(self) -> Self:
        return replace(self, wrap_side=-self.wrap_side)

    @property
    def spring_direction(self) -> Floats:
        """The way the chain leaves the sheave: it does not change over the cycle."""
        return -self.wrap_side * self.start_wrap

    def wrap(self, line: Line) -> Floats:
        return self.start_wrap + self.wrap_side * line.direction

    def rubbing(self, line: Line, tension: Floats, force: Floats) -> Floats:
        """What the two legs leave over, at the pitch radius."""
        return np.asarray((force - tension) * self.pitch_radius * -self.wrap_side)


# ---------------------------------------------------------------------------------------------- by a rigid tie


@dataclass(frozen=True)
class TiedLine(Line):
    """From Q along the tie to the output's pin P, which moves along (ex, ey) when it is drawn."""

    length: Floats  # mm, from Q to P
    ex: Floats
    ey: Floats
    share: Floats | float  # draw of the spring over the way of P
    drawn: Floats

    @property
    def closing(self) -> Floats:
        """Cosine of the angle between the tie and the way of its pin: 1 straight, 0 where the tie pulls no more."""
        return -(self.ux * self.ex + self.uy * self.ey)

    @property
    def pull(self) -> Floats:
        return self.drawn

    @property
    def turning(self) -> Floats:
        # u·(dP − dQ) = 0 gives the way of P; what is across u turns the tie
        way = self.arm / self.closing
        across = way * (self.ux * self.ey - self.uy * self.ex) - (self.ux * self.qx + self.uy * self.qy)
        return np.asarray(across / self.length)

    @property
    def gearing(self) -> Floats | float:
        """Virtual work, T (−u·dQ) = F dp: the way of P is (−u·dQ)/closing, and dp is ``share`` of that."""
        return self.share / self.closing

    @property
    def free_length(self) -> Floats:
        return self.length


@dataclass(frozen=True)
class SlideRun(FarLine):
    """A tie to an output on a slide. The output's pin starts at (start, 0); drawing moves it along ``draw``."""

    start: Floats  # crank radius + link + tie, mm
    length: Floats  # of the tie
    draw: Floats  # direction, rad in the chain frame

    def line(self, crank_radius: Floats, qx: Floats, qy: Floats, taken: Floats | float, link: Floats) -> TiedLine:
        ex, ey = np.cos(self.draw), np.sin(self.draw)
        reach = self.length + taken
        wx, wy = self.start - qx, -qy
        along = wx * ex + wy * ey
        # |w + x e| = reach; the root that is 0 at the start, written so that it costs no digits there
        with np.errstate(invalid="ignore", divide="ignore"):
            spare = np.asarray(wx**2 + wy**2 - reach**2)
            root = np.sqrt(np.asarray(along**2 - spare))
            x = np.where(root - along != 0.0, spare / (root - along), np.nan)
        return TiedLine(qx, qy, (wx + x * ex) / reach, (wy + x * ey) / reach, reach, ex, ey, 1.0, x)

    def mirrored(self) -> Self:
        return replace(self, draw=-self.draw)

    @property
    def spring_direction(self) -> Floats:
        return np.asarray(self.draw + np.pi)

    def wrap(self, line: Line) -> Floats:
        return np.full_like(line.ux, np.nan)

    def rubbing(self, line: Line, tension: Floats, force: Floats) -> Floats:
        return np.zeros_like(tension)


@dataclass(frozen=True)
class RockerRun(FarLine):
    """A tie to a rocker arm about (pivot_x, pivot_y); the spring pulls a sector of radius ``spring_arm`` on it."""

    start: Floats  # crank radius + link + tie, mm: there the output's pin starts, on the chain frame's x axis
    length: Floats  # of the tie
    pivot_x: Floats
    pivot_y: Floats
    arm: Floats
    spring_arm: Floats
    leave: Floats  # direction in which the spring's line leaves the sector, rad in the chain frame

    def line(self, crank_radius: Floats, qx: Floats, qy: Floats, taken: Floats | float, link: Floats) -> TiedLine:
        reach = self.length + taken
        turn, begin = self._turn, self._begin
        vx, vy = qx - self.pivot_x, qy - self.pivot_y
        away = np.hypot(vx, vy)
        with np.errstate(invalid="ignore"):
            opening = np.arccos((self.arm**2 + away**2 - reach**2) / (2.0 * self.arm * away))
        # of the two places of P the one on the side on which it starts, seen from the pivot
        psi = np.arctan2(vy, vx) - turn * opening
        swung = np.mod(turn * (psi - begin) + np.pi, 2.0 * np.pi) - np.pi
        ex, ey = -turn * np.sin(psi), turn * np.cos(psi)
        px, py = self.pivot_x + self.arm * np.cos(psi), self.pivot_y + self.arm * np.sin(psi)
        share = self.spring_arm / self.arm
        drawn = self.spring_arm * swung
        return TiedLine(qx, qy, (px - qx) / reach, (py - qy) / reach, reach, ex, ey, share, drawn)

    @property
    def _begin(self) -> Floats:
        """Direction from the pivot to the output's pin at the start."""
        return np.arctan2(-self.pivot_y, self.start - self.pivot_x)

    @property
    def _turn(self) -> Floats:
        """+1 where the rocker turns counter-clockwise when the tie pulls its pin towards O, −1 the other way."""
        return np.where(-self.pivot_y > 0.0, 1.0, -1.0)

    def mirrored(self) -> Self:
        return replace(self, pivot_y=-self.pivot_y, leave=-self.leave)

    @property
    def spring_direction(self) -> Floats:
        return self.leave

    def wrap(self, line: Line) -> Floats:
        return np.full_like(line.ux, np.nan)

    def rubbing(self, line: Line, tension: Floats, force: Floats) -> Floats:
        """Moment of both forces about the pivot: nothing without friction."""
        return np.asarray(self._turn * (tension * self.arm * line.closing - force * self.spring_arm))
