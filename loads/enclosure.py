"""The study of the enclosure: what the machine sweeps over in three motions, and how far from walls and obstacles.

Everything is seen along the disc axis: what stands in another plane than the parts counts as well. Distances are those
of covers that are never smaller than the true sweep, so a clearance is never too large. mm, rad.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np

from loads.backing_off import BackingOff, backing_off_study
from loads.checks.context import Context
from loads.checks.fit import GEOMETRY
from loads.motions import BACKING_OFF, RELEASE, WINDING, backing_off, release_swing, winding
from loads.records import Check
from parts.design import Design, Enclosure
from parts.layers import machine_layers
from parts.quantities import Units, in_brief
from parts.sweeps import Approach, Body, Cover, Motion, Target, approach, bodies, covers, outline_of

SMOOTH = 0.05  # mm by which an outline that is written is made simpler
ABOUT = 3.0  # times as far as anything reaches: where the world ends that lies outside an enclosure
WALLS = (("above", 1, 1), ("below", 1, -1), ("ahead", 0, 1), ("behind", 0, -1))  # key, axis, side


@dataclass(frozen=True)  # without slots, for the outlines that are worked out once
class EnclosureStudy:
    near: Mapping[str, tuple[Approach, ...]]  # to every wall and obstacle in each sweep, the nearest first
    excess: Mapping[str, float]  # by how much each sweep's covers may be too large, mm
    sag: float | None  # how deep a slack chain can hang below its straight line at most
    units: Units
    covers: Mapping[str, Sequence[Cover]]

    @property
    def checks(self) -> tuple[Check, ...]:
        """What is run into, one row a sweep and target; where a sweep is clear of all, one row that says so."""
        found = []
        for sweep, near in self.near.items():
            found += [_check(sweep, at) for at in [at for at in near if at.clearance < 0.0] or near[:1]]
        return tuple(found)

    @property
    def cautions(self) -> tuple[str, ...]:
        if self.sag is None:
            return ()
        deep = in_brief(self.sag, "length", self.units)
        return (
            f"A slack chain hangs in a bow, up to {deep} beside its straight line: the swept shapes hold the straight "
            "line and the chain's end, not the bow.",
        )

    @cached_property
    def outlines(self) -> dict[str, Any]:
        """Each sweep's outline (shapely), up to twice ``SMOOTH`` larger than the covers."""
        return {sweep: outline_of(found, SMOOTH) for sweep, found in self.covers.items()}


def _check(sweep: str, at: Approach) -> Check:
    """Clear, there is no demand, and it holds; run into, what is there is nothing against the depth."""
    return Check(
        at.part, at.target, "clear of the enclosure", sweep, at.crank_angle, max(0.0, -at.clearance),
        max(0.0, at.clearance), "mm", 1.0,
        f"swept shape against walls and obstacles, seen along the axis, here at most {at.excess:.2g} mm too large",
        GEOMETRY,
        f"at x {at.x:.1f}, y {at.y:.1f} mm in the machine frame",
    )  # fmt: skip


def enclosure_study(c: Context) -> EnclosureStudy | None:
    """The study of one design, or None where it has no table ``[enclosure]``."""
    wish = c.design.enclosure
    if wish is None:
        return None
    found, study = sweeps(c), backing_off_study(c)
    reach = max(_reach(cover) for part in found.values() for cover in part)
    near = {}
    for sweep, part in found.items():
        rows = [approach(part, target, c.design) for target in targets(wish, reach)]
        for at in rows:
            if not math.isfinite(at.clearance):
                raise ValueError(f"no clearance of {at.part} to {at.target}")  # it must never hold for want of a number
        near[sweep] = tuple(sorted(rows, key=lambda at: at.clearance))
    return EnclosureStudy(
        near=near, excess={sweep: max(float(cover.excess.max()) for cover in part) for sweep, part in found.items()},
        sag=_sag(c, study), units=c.design.identity.units, covers=found,
    )  # fmt: skip


def sweeps(c: Context) -> dict[str, list[Cover]]:
    """Covers of every part in each of the three motions."""
    study = backing_off_study(c)
    found = bodies(machine_layers(c.parts, c.design, c.sizes))
    motions = {
        WINDING: winding(c.past),
        RELEASE: release_swing(c.past, study),
        BACKING_OFF: backing_off(c.past, study, c.sizes.chain_end.length),
    }
    return {name: _covers(found, several, c.design) for name, several in motions.items()}


def _covers(found: Sequence[Body], motions: Sequence[Motion], design: Design) -> list[Cover]:
    still = [body for body in found if body.mover == "machine"]
    moving = [body for body in found if body.mover != "machine"]
    return [
        *(covers(body, motions[0], design) for body in still),
        *(covers(body, motion, design) for body in moving for motion in motions),
    ]


def targets(wish: Enclosure, reach: float) -> list[Target]:
    """Walls and obstacles by name. ``reach``: everything lies within so much of the disc axis.

    ``above`` and ``below`` are the distances of a ceiling and a floor from the disc axis along y, ``ahead`` and
    ``behind`` those of walls along x, ahead being +x, all in the machine frame. An outline is what the machine stands in.
    """
    import shapely

    given = [(key, axis, side, getattr(wish, key)) for key, axis, side in WALLS]
    found = [
        Target(f"wall {key}", axis=axis, side=side, at=side * at) for key, axis, side, at in given if at is not None
    ]
    if wish.outline is not None:
        most = ABOUT * max(reach, float(np.abs(wish.outline).max()))
        outside = shapely.difference(shapely.box(-most, -most, most, most), shapely.Polygon(wish.outline))
        found.append(Target("outline", outside))
    found += [Target(f"obstacle {i}", shapely.Polygon(corners)) for i, corners in enumerate(wish.obstacles, 1)]
    return found


def _reach(cover: Cover) -> float:
    import shapely

    return float(np.abs(shapely.bounds(cover.cores)).max() + cover.radius.max())


def _sag(c: Context, study: BackingOff) -> float | None:
    """Depth (mm) that a chain longer than its way by the slack can hang off the straight line between its two ends.

    A string of length D + e between points D apart stays within the ellipse about them: sqrt((D + e)² − D²)/2 at most.
    Source: geometry of the ellipse. D is that of the start dead centre, where the slack is all there.
    """
    if study.slack <= 0.0:
        return None
    straight = float(c.past.winding.line.free_length[0]) if c.design.far_end.over_sheave else 0.0
    return math.sqrt((straight + study.slack) ** 2 - straight**2) / 2.0
