"""Proportions of the lock pin and of its two holes in the disc."""

from __future__ import annotations

import math

import numpy as np

from loads.checks.lock_pin import lever, locked_torque
from loads.proportions.basis import BAR, first
from loads.proportions.stops import StopSide
from parts.design import Floats
from parts.places import hub_bolts
from parts.sizes import DiscSizes, LinkSizes, LockPinSizes, StopSizes

LEAST_LOCK = 6.0  # mm; common practice, no source
WEB = 0.25  # of the larger hole; as the check of webs has it


class LockSide(StopSide):
    """Where the lock pin fits, and how thick it has to be there: the stop's holes are in the same disc."""

    def _lock_pin(self, disc: DiscSizes, crank: float, link: LinkSizes, stop: StopSizes) -> LockPinSizes | None:
        wish = self.design.lock_pin
        if wish is None:
            return None
        material = self.ledger.material("lock_pin.material", wish.material, BAR, self.catalogue)
        hold = float(self.past.figures.events.hold)
        torque = locked_torque(self.design, self.past)
        d = self.within(self.pins[self.pins >= min(LEAST_LOCK, self.pins[-1])], material)
        if wish.diameter is not None:
            d = np.array([wish.diameter])
        holes = self._disc_holes(disc, crank, link, stop)
        best: tuple[float, LockPinSizes] | None = None
        for radius in self._radii(disc, float(d[0])):
            use = self.pin_use(d, material, torque / radius, torque / radius * lever(disc.thickness))
            diameter = first(d, use)
            room, start, held = self._room(holes, disc, radius, diameter, hold)
            rank = min(room, 0.0) - 100.0 * max(float(np.min(use)) - 1.0, 0.0)
            if best is None or rank > best[0] + 1e-9:
                best = rank, LockPinSizes(diameter, radius, start, held, material)
        assert best is not None
        found = best[1]
        take = self.ledger.take
        take("lock_pin.diameter", wish.diameter, found.diameter, "smallest that holds spring and drive")
        take("lock_pin.radius", wish.radius, found.radius, "where both holes clear the disc's others")
        return found

    def _radii(self, disc: DiscSizes, least: float) -> list[float]:
        wish = self.design.lock_pin
        if wish is not None and wish.radius is not None:
            return [wish.radius]
        outer = disc.outer_diameter / 2.0 - least / 2.0 - max(2.0, 0.5 * least)
        return [float(r) for r in np.arange(outer, max(disc.bore, 0.3 * outer), -2.0)] or [outer]

    def _disc_holes(self, disc: DiscSizes, crank: float, link: LinkSizes, stop: StopSizes) -> Floats:
        """x, y and diameter (k, 3) of everything that is cut out of the disc of a ccw machine."""
        sink = max(disc.counterbore_diameter, disc.bolt_hole)
        rows = [(0.0, 0.0, disc.bore), (self.design.mechanism.crank_radius, 0.0, crank), *self.stop_holes(link, stop)]
        rows += [(x, y, sink) for x, y in hub_bolts(disc)]
        return np.array(rows)

    def _room(self, holes: Floats, disc: DiscSizes, radius: float, d: float, hold: float) -> tuple[float, float, float]:
        """Least material beyond what is wanted about both holes (mm), and the angles of start and hold hole.

        One bush of the frame serves both where the two holes are then far enough apart, else there are two bushes.
        """
        angles = np.radians(np.arange(0.0, 360.0, 1.0))
        web = max(2.0, WEB * d)
        room = np.full(angles.shape, disc.outer_diameter / 2.0 - radius - d / 2.0 - web)
        x, y = radius * np.cos(angles), radius * np.sin(angles)
        for hx, hy, hd in holes:
            room = np.minimum(room, np.hypot(x - hx, y - hy) - (d + hd) / 2.0 - max(2.0, WEB * max(d, hd)))
        turned = round(math.degrees(hold))
        # of the start hole with the hold hole that the same bush asks for
        one = np.minimum(room, np.roll(room, turned))
        one = np.minimum(one, 2.0 * radius * abs(math.sin(hold / 2.0)) - d - web)
        i = int(np.argmax(one))
        if one[i] >= 0.0:
            return float(one[i]), float(angles[i]), float(angles[i]) - hold
        first_best = int(np.argmax(room))
        beside = 2.0 * radius * np.abs(np.sin((angles - angles[first_best]) / 2.0)) - d - web
        second = np.minimum(room, beside)
        k = int(np.argmax(second))
        return float(min(room[first_best], second[k])), float(angles[first_best]), float(angles[k])
