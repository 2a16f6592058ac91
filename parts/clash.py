"""The clash sweep: which parts meet, where and at which crank angle, layer by layer over the whole cycle.

Poses come in as arrays. Lengths in mm, angles in rad; places in the machine frame.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from parts.assembly import Frame, Pose, pose
from parts.design import Design, Floats
from parts.far_ends.registry import KINDS
from parts.layers import Geometry, Layer, Strip, machine_layers
from parts.meeting import at_poses, gaps, meeting_point, relative
from parts.outline import Part
from parts.sizes import Sizes
from parts.stack import Stack

MEETS = 0.01  # mm of overlap in z from which two layers can meet
TOUCHES = 0.01  # mm of depth from which two parts that should be apart clash

# What may be in the chain's plane, besides the chain.
IN_CHAIN_PLANE = frozenset({"chain_pin", "chain_end", "chain_spacer", "sheave", *KINDS})

# Parts that are meant to meet, and how deep (mm) they may seem to: no limit where one is inside the other.
_INSIDE = float("inf")
MEANT: dict[frozenset[str], float] = {
    frozenset(pair): depth
    for pair, depth in {
        ("crank_pin", "swing_link"): _INSIDE,  # a pin in its eye
        ("chain_pin", "swing_link"): _INSIDE,
        ("chain_pin", "chain_end"): _INSIDE,
        ("crank_pin", "crank_disc"): _INSIDE,  # pressed in
        ("stop", "crank_disc"): _INSIDE,
        ("crank_spacer", "crank_pin"): _INSIDE,  # a ring on its pin
        ("chain_spacer", "chain_pin"): _INSIDE,
        ("chain_pin", "tie"): _INSIDE,
        # a loose part, in its hole only while nothing turns
        **{("lock_pin", other): _INSIDE for other in ("crank_disc", "crank_pin", "stop", "crank_spacer")},
        ("stop", "swing_link"): 0.05,  # the flank on the stop
        **{(name, other): _INSIDE for name in KINDS for other in ("chain_end", "sheave")},  # in its slots, on its rim
    }.items()
}


@dataclass(frozen=True, slots=True)
class Sweep:
    """Poses over which clashes are looked for; arrays of one length, machine frame, rad and mm.

    ``disc_angle`` is the direction O→A, ``link_angle`` A→B, ``chain_angle`` from the chain pin along the chain, which
    runs straight as far as ``free_length`` from the chain pin. ``taut`` is false in the release swing, in which the
    chain hangs and is left out.
    """

    crank_angle: Floats
    disc_angle: Floats
    link_angle: Floats
    chain_angle: Floats
    free_length: Floats
    taut: NDArray[np.bool_]


@dataclass(frozen=True, slots=True)
class Clash:
    """Two parts that run into each other: first at ``crank_angle``, at (x, y); ``depth`` is the most in the sweep."""

    part_a: str
    part_b: str
    sweep: str  # "winding", "release"
    crank_angle: float
    x: float
    y: float
    depth: float
    deepest_at: float

    def __str__(self) -> str:
        return (
            f"{self.part_a} and {self.part_b} meet at crank angle {np.degrees(self.crank_angle):.1f}° ({self.sweep}), "
            f"at ({self.x:.1f}, {self.y:.1f}) mm, {self.depth:.2f} mm deep at {np.degrees(self.deepest_at):.1f}°"
        )


@dataclass(frozen=True, slots=True)
class Clearance:
    """The least distance between two parts that move past each other in one layer, and where it occurs."""

    part_a: str
    part_b: str
    sweep: str
    clearance: float
    crank_angle: float
    x: float
    y: float


@dataclass(frozen=True, slots=True)
class Intrusion:
    """A part that stands ``depth`` mm in the chain's plane, and what it meets there first, if anything."""

    part: str
    depth: float
    meets: str | None
    crank_angle: float | None

    def __str__(self) -> str:
        start = f"{self.part} stands {self.depth:.2f} mm in the chain's plane"
        if self.meets is None or self.crank_angle is None:
            return start
        return f"{start} and meets {self.meets} at crank angle {np.degrees(self.crank_angle):.1f}°"


@dataclass(frozen=True, slots=True)
class Findings:
    clashes: tuple[Clash, ...]
    clearances: tuple[Clearance, ...]
    contacts: tuple[Clearance, ...]  # how near parts come that are meant to meet: zero, or they never do
    intrusions: tuple[Intrusion, ...]

    @property
    def clear(self) -> bool:
        return not self.clashes and not self.intrusions


@dataclass(frozen=True, slots=True)
class _Motion:
    """One sweep's poses, with all movers' frames."""

    name: str
    crank_angle: Floats
    pose: Pose
    chain_to: Floats
    chain_taut: bool


def sweep(parts: Iterable[Part], design: Design, sizes: Sizes, stack: Stack, poses: Sweep) -> Findings:
    """Look for parts that meet in any of the poses, and for parts that enter the chain's plane."""
    layers = machine_layers(parts, design, sizes)
    motions = [_motion(design, poses, taut) for taut in (True, False) if np.any(poses.taut == taut)]
    clashes: dict[tuple[str, str, str], Clash] = {}
    clearances: dict[tuple[str, str], Clearance] = {}
    for a, b in _pairs(layers):
        allowed = MEANT.get(frozenset((a.key, b.key)), TOUCHES)
        for motion in motions:
            if not motion.chain_taut and not KINDS.keys().isdisjoint((a.key, b.key)):
                continue
            clash, clearance = _look(a, b, motion, allowed)
            if clash is not None:
                place = (clash.part_a, clash.part_b, clash.sweep)
                clashes[place] = _joined(clashes.get(place), clash)
            elif clearance is not None:
                pair = (clearance.part_a, clearance.part_b)
                if pair not in clearances or clearance.clearance < clearances[pair].clearance:
                    clearances[pair] = clearance
    found = tuple(sorted(clashes.values(), key=lambda c: (c.sweep == "release", c.crank_angle, c.part_a, c.part_b)))
    least = sorted(clearances.values(), key=lambda c: (c.clearance, c.part_a, c.part_b))
    meant = [c for c in least if frozenset((c.part_a, c.part_b)) in MEANT]
    apart = tuple(c for c in least if c not in meant)
    return Findings(found, apart, tuple(meant), _intrusions(layers, stack, found))


def _motion(design: Design, poses: Sweep, taut: bool) -> _Motion:
    rows = np.flatnonzero(poses.taut == taut)
    at = pose(design, poses.disc_angle[rows], poses.link_angle[rows], poses.chain_angle[rows])
    name = "winding" if taut else "release"
    return _Motion(name, poses.crank_angle[rows], at, poses.free_length[rows], taut)


def _pairs(layers: list[Layer]) -> list[tuple[Layer, Layer]]:
    """Layers of different copies that share a stretch of z; of pairs that are alike in the plane only the first."""
    seen: set[tuple[int, int]] = set()
    found = []
    for i, a in enumerate(layers):
        for b in layers[i + 1 :]:
            if a.name == b.name or min(a.z_high, b.z_high) - max(a.z_low, b.z_low) <= MEETS:
                continue
            if MEANT.get(frozenset((a.key, b.key))) == _INSIDE:
                continue
            alike = (id(a.geometry), id(b.geometry))
            if alike not in seen:
                seen.add(alike)
                found.append((a, b))
    return found


def _look(a: Layer, b: Layer, motion: _Motion, allowed: float) -> tuple[Clash | None, Clearance | None]:
    outer, inner = motion.pose.of(a.mover), motion.pose.of(b.mover)
    chain_to, angle = motion.chain_to, motion.crank_angle
    if a.mover == b.mover and not isinstance(a.geometry, Strip) and not isinstance(b.geometry, Strip):
        outer, inner = at_poses(outer, slice(0, 1)), at_poses(inner, slice(0, 1))
        chain_to, angle = chain_to[:1], angle[:1]
    b_in_a = relative(inner, outer)
    apart = gaps(a.geometry, b.geometry, b_in_a, chain_to)
    lowest = int(np.argmin(apart))
    meets = np.flatnonzero(apart < -allowed)
    at = int(meets[0]) if meets.size else lowest
    x, y = _place(a.geometry, b.geometry, at_poses(b_in_a, slice(at, at + 1)), float(chain_to[at]), outer, at)
    first, second = (a, b) if a.key <= b.key else (b, a)
    if not meets.size:
        return None, Clearance(
            first.key, second.key, motion.name, max(0.0, float(apart[lowest])), float(angle[lowest]), x, y
        )
    clash = Clash(
        first.key,
        second.key,
        motion.name,
        float(angle[at]),
        x,
        y,
        -float(apart[lowest]),
        float(angle[lowest]),
    )
    return clash, None


def _place(a: Geometry, b: Geometry, b_in_a: Frame, chain_to: float, outer: Frame, at: int) -> tuple[float, float]:
    x, y = meeting_point(a, b, b_in_a, chain_to)
    c, s = float(np.cos(outer.rotation[at])), float(np.sin(outer.rotation[at]))
    return float(outer.x[at]) + c * x - s * y, float(outer.y[at]) + s * x + c * y


def _joined(one: Clash | None, other: Clash) -> Clash:
    """Two layers of the same two parts clash: the earlier meeting, the greater depth."""
    if one is None:
        return other
    first = min(one, other, key=lambda c: c.crank_angle)
    deepest = max(one, other, key=lambda c: c.depth)
    return Clash(
        first.part_a,
        first.part_b,
        first.sweep,
        first.crank_angle,
        first.x,
        first.y,
        deepest.depth,
        deepest.deepest_at,
    )


def _intrusions(layers: list[Layer], stack: Stack, clashes: tuple[Clash, ...]) -> tuple[Intrusion, ...]:
    """Parts that stand in the chain's plane though they have no business there."""
    half = stack.chain_plane_width / 2
    deepest: dict[str, float] = {}
    for layer in layers:
        depth = min(layer.z_high, half) - max(layer.z_low, -half)
        if layer.key not in IN_CHAIN_PLANE and depth > MEETS:
            deepest[layer.key] = max(depth, deepest.get(layer.key, 0.0))
    found = []
    for part, depth in sorted(deepest.items()):
        meeting = [
            (clash, clash.part_b if clash.part_a == part else clash.part_a)
            for clash in clashes
            if part in (clash.part_a, clash.part_b)
        ]
        there = [(clash, other) for clash, other in meeting if other in IN_CHAIN_PLANE]
        first = min(there, key=lambda row: (row[0].sweep == "release", row[0].crank_angle), default=None)
        found.append(Intrusion(part, depth, first[1] if first else None, first[0].crank_angle if first else None))
    return tuple(found)
