"""Proportions of the crank disc: thickness, bore, hub bolts, rim."""

from __future__ import annotations

import math

import numpy as np

from loads.checks import eyes, pins
from loads.checks.disc import bolt_bearing, bolt_rupture_use, bolt_yield_use, chord_stress, hub_bolt_forces
from loads.practice import value
from loads.proportions.basis import EDGE, LEAST_BOLT, LEAST_BORE, SPIGOT, Pair, first, next_up, round_up
from loads.proportions.stops import StopSide
from parts.contact_lengths import pin_in_disc
from parts.design import Floats
from parts.hardware import CapScrew, cap_screw, cap_screw_for_hole, cap_screws
from parts.sizes import DiscSizes, LinkSizes, StopSizes
from parts.stack import Stack
from parts.stop_layout import stop_center

LOOSE = "H7/m6"  # of the press fits the one that may leave most play


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
        open_plates = self.from_floor(there_are, "disc.thickness")
        plates = np.array([wish.thickness]) if wish.thickness is not None else open_plates[open_plates >= seat]
        screws, k = self._hub_bolts(bore), 0
        best, least = None, math.inf
        for t in plates if plates.size else there_are[-1:]:
            stack = self.stack(end_width, link.thickness, float(t))
            disc = self._plan(pair, link, stop, bore, screws[k], count, float(t), pin)
            while self._bolts_use(disc, stack) > 1.0 and k + 1 < len(screws):
                k += 1
                disc = self._plan(pair, link, stop, bore, screws[k], count, float(t), pin)
            sunk = disc.counterbore_depth <= 0.7 * t
            use = max(self._seats_use(pair, stop, stack, float(t)), self._plate_use(disc, pair, link, stop, stack))
            use = use if sunk else max(use, 1.0) * 1e3  # heads below the face come first
            if best is None or use < least * (1.0 - 1e-6):
                best, least = disc, use
            if use <= 1.0:
                break
        disc = best if best is not None else disc
        take(
            "disc.thickness",
            wish.thickness,
            disc.thickness,
            "plate that holds the pins by 0.6 of their diameter, sinks the hub bolts' heads and bears between its holes",
        )
        take(
            "disc.bore", wish.bore, bore, f"spigot of {SPIGOT:g} of a shaft that bears the tilting moment at its target"
        )
        take(
            "disc.bolt_hole",
            wish.bolt_hole,
            disc.bolt_hole,
            "clearance hole of the hub bolt that bears torque, pull and tilt",
        )
        take(
            "disc.bolt_circle",
            wish.bolt_circle,
            disc.bolt_circle,
            "smallest circle that leaves webs to bore, pin hole and stop",
        )
        take(
            "disc.bolt_phase",
            wish.bolt_phase,
            disc.bolt_phase,
            "turned to where the webs between the holes are widest",
            "angle",
        )
        take(
            "disc.outer_diameter", wish.outer_diameter, disc.outer_diameter,
            "rim that leaves the crank pin's eye, the stop and the hub bolts their edge distance",
        )  # fmt: skip
        return disc

    def _plan(
        self,
        pair: Pair,
        link: LinkSizes,
        stop: StopSizes,
        bore: float,
        screw: CapScrew,
        count: int,
        t: float,
        pin: float,
    ) -> DiscSizes:
        """The disc that one plate and one hub bolt lead to; ``pin`` is the largest force (N) of the crank pin."""
        wish, sink = self.design.disc, screw.counterbore_diameter
        circle, phase = self._bolt_layout(pair, link, stop, bore, sink, count)
        outer = wish.outer_diameter
        if outer is None:
            outer = self._outer(pair, link, stop, circle, sink, t, pin)
        hole = wish.bolt_hole if wish.bolt_hole is not None else screw.clearance_hole
        return DiscSizes(
            outer, t, bore, circle, count, hole, phase, screw.thread, sink, screw.head_height + 0.5, self.disc_material
        )

    def _in_disc(self, force: Floats) -> Floats:
        """A force of the link's frame in the disc's."""
        s = self.past.state
        c, sn = np.cos(s.link_direction - s.crank_angle), np.sin(s.link_direction - s.crank_angle)
        return np.stack([force[0] * c - force[1] * sn, force[0] * sn + force[1] * c, np.zeros_like(force[0])])

    def _bolts_use(self, disc: DiscSizes, stack: Stack) -> float:
        """Largest use of a hub bolt's yield and rupture, as the check has it."""
        chain = self._in_disc(self.loads.chain)
        moment = -couple(stack.disc_back - stack.link_middle + stack.chain_offset, chain)
        moment[2] = self.loads.torque
        angles = disc.bolt_phase + 2.0 * math.pi * np.arange(disc.bolt_count) / disc.bolt_count
        shear, tension = hub_bolt_forces(-chain, moment, disc.bolt_circle / 2.0, angles)
        screw = cap_screw(disc.bolt_thread)
        gives = np.max(bolt_yield_use(tension, shear, screw.stress_area, screw.yield_strength)) * self.yields
        breaks = np.max(bolt_rupture_use(tension, shear, screw.stress_area, value("bolts", "ultimate"))) * self.ultimate
        return float(max(gives, breaks))

    def _plate_use(self, disc: DiscSizes, pair: Pair, link: LinkSizes, stop: StopSizes, stack: Stack) -> float:
        """Largest use of the plate: sections towards pin and stop, bearing of hub bolts and dowels."""
        f, t, screw = self.loads, disc.thickness, cap_screw(disc.bolt_thread)
        f_y, f_u = disc.material.yield_strength(t), disc.material.ultimate_strength(t)
        angles = disc.bolt_phase + 2.0 * math.pi * np.arange(disc.bolt_count) / disc.bolt_count
        x, y = disc.bolt_circle / 2.0 * np.cos(angles), disc.bolt_circle / 2.0 * np.sin(angles)
        r = self.design.mechanism.crank_radius
        others = [(0.0, 0.0, disc.bore), (r, 0.0, pair.crank), *self.stop_holes(link, stop)]
        through = [(*at, disc.bolt_hole, t) for at in zip(x, y, strict=True)] + [(*hole, t) for hole in others]
        sink, depth = disc.counterbore_diameter, disc.counterbore_depth
        sinks = [(*at, d, h) for at in zip(x, y, strict=True) for d, h in ((sink, depth), (disc.bolt_hole, -depth))]
        holes = np.array(through + sinks)
        pin, chain = -self._in_disc(f.pin), self._in_disc(f.chain)
        push = self._in_disc(np.stack([np.zeros_like(f.stop), -f.stop, np.zeros_like(f.stop)]))
        arm = stack.disc_middle - stack.link_middle
        (sx, sy), _ = stop_center(self.design.mechanism, link.width, stop)
        uses = []
        for center, d, force, moment in (
            ((r, 0.0), pair.crank, pin, couple(arm, pin) + couple(stack.chain_offset, chain)),
            ((sx, sy), max(stop.diameter, stop.length, stop.width), push, couple(arm, push)),
        ):
            stress = chord_stress(force, moment, center, d, disc.bore, disc.outer_diameter, t, holes)
            uses.append(float(np.max(stress)) * self.yields / f_y)
        torque = float(np.max(np.abs(f.torque)))
        shear = (float(np.max(f.tension)) + 2.0 * torque / disc.bolt_circle) / disc.bolt_count
        gaps = [np.hypot(x - a, y - b) - d / 2.0 for a, b, d in others]
        beside = disc.bolt_circle * math.sin(math.pi / disc.bolt_count) - disc.bolt_hole / 2.0
        edge = min(float(np.min(gaps)), beside, (disc.outer_diameter - disc.bolt_circle) / 2.0)
        bears = bolt_bearing(t - depth, screw.diameter, disc.bolt_hole, max(edge, 0.0), f_u, value("bolts", "ultimate"))
        if bears > 0.0:  # where bolts break into another hole no plate is thick enough: the check says so
            uses.append(shear * self.ultimate / bears)
        if stop.style == "block":
            uses.append(self.dowel_bearing_use(stop, t, self.disc_material))
        return max(uses)

    def _seats_use(self, pair: Pair, stop: StopSizes, stack: Stack, t: float) -> float:
        """Share of the bearing capacity that crank pin and post use in a disc of thickness ``t``."""
        f, arm = self.loads, stack.disc_middle - stack.link_middle
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

    def _hub_bolts(self, bore: float) -> tuple[CapScrew, ...]:
        """The hub bolts that may be taken, the smallest first: the one that fits a given hole, or those in scale."""
        given = self.design.disc.bolt_hole
        if given is not None:
            return (cap_screw_for_hole(given),)
        listed = tuple(s for s in cap_screws() if s.clearance_hole >= self.least("disc.bolt_hole") - 1e-9)
        return tuple(s for s in listed if s.diameter >= min(LEAST_BOLT * bore, 12.0)) or listed[-1:]

    def _bolt_layout(
        self, pair: Pair, link: LinkSizes, stop: StopSizes, bore: float, sink: float, count: int
    ) -> tuple[float, float]:
        wish = self.design.disc
        others = [(self.design.mechanism.crank_radius, 0.0, pair.crank), *self.stop_holes(link, stop)]
        least = bore + sink + 2.0 * max(2.0, 0.25 * max(bore, sink)) + 2.0
        circles = np.arange(round_up(least, 2.0), least + 10.0 * self.design.mechanism.link_length, 2.0)
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
        r = self.design.mechanism.crank_radius
        f_y, f_u = self.disc_material.yield_strength(t), self.disc_material.ultimate_strength(t)
        play = eyes.largest_play(self.design.fits.crank_pin_disc or LOOSE, pair.crank)
        least = max(EDGE * pair.crank, 5.0)
        edges = np.arange(least, least + 6.0 * pair.crank, 0.25)
        rules = eyes.eye_rules(t, pair.crank, play, f_y, f_u, eyes.Around(edges, edges, edges))
        uses = [pin * (self.yields if rule.by_yield else self.ultimate) / rule.capacity for rule in rules]
        edge = first(edges, np.max(uses, axis=0))
        rim = r + pair.crank / 2.0 + edge
        (x, y), direction = stop_center(self.design.mechanism, link.width, stop)
        if stop.style == "post":
            rim = max(rim, math.hypot(x, y) + stop.diameter / 2.0 + max(0.4 * stop.diameter, 4.0))
        else:
            along, across = stop.length / 2.0, stop.width / 2.0
            rim = max(rim, farthest(x, y, direction, along, across) + 3.0)
        rim = max(rim, circle / 2.0 + sink / 2.0 + max(3.0, 0.3 * sink), self.least("disc.outer_diameter") / 2.0)
        return round_up(2.0 * rim, 5.0 * self.step)


def couple(depth: float, force: Floats) -> Floats:
    """Moment (3, n) of a force (3, n) that acts ``depth`` mm further towards the viewer."""
    return depth * np.stack([-force[1], force[0], np.zeros_like(force[0])])


def farthest(x: float, y: float, direction: float, along: float, across: float) -> float:
    """Distance of the farthest corner of a block from the origin."""
    c, s = math.cos(direction), math.sin(direction)
    corners = [(x + a * c - b * s, y + a * s + b * c) for a in (along, -along) for b in (across, -across)]
    return max(math.hypot(*corner) for corner in corners)
