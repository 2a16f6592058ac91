"""Proportions of the crank disc: thickness, bore, hub bolts, rim."""

from __future__ import annotations

import math

import numpy as np

from loads.checks import eyes, pins
from loads.proportions.basis import EDGE, LEAST_BOLT, LEAST_BORE, SPIGOT, Pair, first, next_up, round_up
from loads.proportions.stops import StopSide
from parts.contact_lengths import pin_in_disc
from parts.design import Floats
from parts.hardware import CapScrew, cap_screw_for_hole, cap_screws
from parts.sizes import DiscSizes, LinkSizes, StopSizes
from parts.stack import Stack
from parts.stop_layout import stop_center


class DiscSide(StopSide):
    """The disc, once link, pins and stop are known."""

    def _bore_for(self, link: LinkSizes, pair: Pair, end_width: float) -> float:
        if self.design.disc.bore is not None:
            return self.design.disc.bore
        stack = self.stack(end_width, link.thickness, next_up(self.plates, max(0.8 * pair.crank, 10.0)))
        pull = float(np.max(self.loads.tension))
        return self._bore(pull * (stack.disc_back - stack.link_middle + stack.chain_offset), pull)

    def _disc(self, pair: Pair, link: LinkSizes, stop: StopSizes, end_width: float, bore: float) -> DiscSizes:
        wish, f, take = self.design.disc, self.loads, self.ledger.take
        seat = max(0.6 * pair.crank, 0.6 * stop.diameter)
        pin = float(np.max(np.linalg.norm(f.pin, axis=0)))
        pull, torque = float(np.max(f.tension)), float(np.max(np.abs(f.torque)))
        count = int(
            take(
                "disc.bolt_count",
                wish.bolt_count,
                6,
                "bolts on a drive hub of this size; common practice, no source",
                "count",
            )
        )
        there_are = self.within(self.plates, self.disc_material)
        plates = np.array([wish.thickness]) if wish.thickness is not None else there_are[there_are >= seat]
        for t in plates if plates.size else there_are[-1:]:
            stack = self.stack(end_width, link.thickness, float(t))
            tilt = pull * (stack.disc_back - stack.link_middle + stack.chain_offset)
            screw = self._hub_bolt(count, bore, tilt, pull, torque, wish.bolt_hole)
            if (screw.head_height + 0.5) <= 0.7 * t and self._seats_use(pair, stop, stack, float(t)) <= 1.0:
                break
        thickness = take(
            "disc.thickness",
            wish.thickness,
            float(t),
            "plate that holds the pins by 0.6 of their diameter and sinks the hub bolts' heads",
        )
        bore = take(
            "disc.bore", wish.bore, bore, f"spigot of {SPIGOT:g} of a shaft that bears the tilting moment at its target"
        )
        hole = take(
            "disc.bolt_hole",
            wish.bolt_hole,
            screw.clearance_hole,
            "clearance hole of the hub bolt that bears torque, pull and tilt",
        )
        sink = screw.counterbore_diameter
        circle, phase = self._bolt_layout(pair, link, stop, bore, sink, count)
        circle = take(
            "disc.bolt_circle", wish.bolt_circle, circle, "smallest circle that leaves webs to bore, pin hole and stop"
        )
        phase = take(
            "disc.bolt_phase", wish.bolt_phase, phase, "turned to where the webs between the holes are widest", "angle"
        )
        outer = take(
            "disc.outer_diameter", wish.outer_diameter, self._outer(pair, link, stop, circle, sink, thickness, pin),
            "rim that leaves the crank pin's eye, the stop and the hub bolts their edge distance",
        )  # fmt: skip
        return DiscSizes(
            outer,
            thickness,
            bore,
            circle,
            count,
            hole,
            phase,
            screw.thread,
            sink,
            screw.head_height + 0.5,
            self.disc_material,
        )

    def _seats_use(self, pair: Pair, stop: StopSizes, stack: Stack, t: float) -> float:
        """Share of the bearing capacity that crank pin and post use in a disc of thickness ``t``."""
        f, arm = self.loads, stack.disc_middle - stack.link_middle

        def couple(depth: float, force: Floats) -> Floats:
            return depth * np.stack([-force[1], force[0], np.zeros_like(force[0])])

        seats = [(pair.crank, self.crank_material, -f.pin, couple(arm, -f.pin) + couple(stack.chain_offset, f.chain))]
        if stop.style == "post":
            push = np.stack([np.zeros_like(f.stop), f.stop, np.zeros_like(f.stop)])
            seats.append((stop.diameter, self.stop_material, push, couple(arm, push)))
        uses = []
        for d, material, force, moment in seats:
            touch = pin_in_disc(d, t)
            pressed = float(np.max(eyes.end_pressed_force(force, moment, touch)))
            use = self.bearing_use(np.array([d]), touch, pressed, material, self.disc_material, t, False)
            uses.append(float(use[0]))
        return max(uses)

    def _bore(self, tilt: float, pull: float) -> float:
        least = max(8.0, LEAST_BORE * self.design.mechanism.crank_radius)
        d = self.pins[self.pins >= min(least, self.pins[-1])]
        f_y = np.array([self.crank_material.yield_strength(float(x)) for x in d])
        # the first bearing stands about one diameter behind the disc
        use = (tilt + pull * d) * self.yields / pins.first_yield_bending_capacity(d, f_y)
        return next_up(d, SPIGOT * first(d, use))

    def _hub_bolt(
        self, count: int, bore: float, tilt: float, pull: float, torque: float, given: float | None
    ) -> CapScrew:
        if given is not None:
            return cap_screw_for_hole(given)
        for screw in (s for s in cap_screws() if s.diameter >= min(LEAST_BOLT * bore, 12.0)):
            circle = bore + 2.2 * screw.counterbore_diameter
            tension = 4.0 * tilt / (count * circle) * self.yields
            shear = (pull / count + 2.0 * torque / (count * circle)) * self.yields
            capacity = screw.stress_area * screw.yield_strength
            if math.hypot(tension / capacity, shear / (capacity / math.sqrt(3.0))) <= 1.0:
                return screw
        return cap_screws()[-1]

    def _bolt_layout(
        self, pair: Pair, link: LinkSizes, stop: StopSizes, bore: float, sink: float, count: int
    ) -> tuple[float, float]:
        wish = self.design.disc
        others = [(self.design.mechanism.crank_radius, 0.0, pair.crank), *self.stop_holes(link, stop)]
        least = bore + sink + 2.0 * max(2.0, 0.25 * max(bore, sink)) + 2.0
        circles = np.arange(round_up(least, 2.0), least + 4.0 * self.design.mechanism.link_length, 2.0)
        if wish.bolt_circle is not None:
            circles = np.array([wish.bolt_circle])
        phases = np.radians(np.arange(0.0, 360.0 / count, 1.0))
        if wish.bolt_phase is not None:
            phases = np.array([wish.bolt_phase])
        angles = phases[:, None] + 2.0 * math.pi * np.arange(count) / count
        best = (-math.inf, float(circles[0]), float(phases[0]))
        for circle in circles:
            room = np.full(len(phases), math.inf)
            x, y = circle / 2.0 * np.cos(angles), circle / 2.0 * np.sin(angles)
            for ox, oy, d in others:
                wanted = max(2.0, 0.25 * max(d, sink))
                web = np.hypot(x - ox, y - oy) - (d + sink) / 2.0 - wanted
                room = np.minimum(room, web.min(axis=1))
            i = int(np.argmax(room))
            if room[i] > best[0] + 1e-9:
                best = (float(room[i]), float(circle), float(phases[i]))
            if best[0] >= 0.0:
                break
        return best[1], best[2]

    def _outer(
        self, pair: Pair, link: LinkSizes, stop: StopSizes, circle: float, sink: float, t: float, pin: float
    ) -> float:
        r, f_u = self.design.mechanism.crank_radius, self.disc_material.ultimate_strength(t)
        tear = pin * self.ultimate / (1.2 * f_u * t) - pair.crank / 2.0
        net = pin * self.ultimate / (2.0 * t * f_u)
        edge = max(EDGE * pair.crank, tear, net, 5.0)
        rim = r + pair.crank / 2.0 + edge
        (x, y), direction = stop_center(self.design.mechanism, link.width, stop)
        if stop.style == "post":
            rim = max(rim, math.hypot(x, y) + stop.diameter / 2.0 + max(0.4 * stop.diameter, 4.0))
        else:
            along, across = stop.length / 2.0, stop.width / 2.0
            rim = max(rim, farthest(x, y, direction, along, across) + 3.0)
        rim = max(rim, circle / 2.0 + sink / 2.0 + max(3.0, 0.3 * sink))
        return round_up(2.0 * rim, 5.0 * self.step)


def farthest(x: float, y: float, direction: float, along: float, across: float) -> float:
    """Distance of the farthest corner of a block from the origin."""
    c, s = math.cos(direction), math.sin(direction)
    corners = [(x + a * c - b * s, y + a * s + b * c) for a in (along, -along) for b in (across, -across)]
    return max(math.hypot(*corner) for corner in corners)
