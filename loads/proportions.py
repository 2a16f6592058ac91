"""Sizes that the design leaves open, by trade proportion from the loads.

Each is the smallest preferred size at which the check's own formula reaches its target, so proportion and check cannot
disagree. A size that the design gives is taken as it is; where no preferred size is enough the largest is taken and the
check says what falls short.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from loads.checks import eyes, pins
from loads.checks.link import column_stress, section_stress
from loads.checks.stop import contact_modulus, line_contact_yield_force
from loads.members import History
from parts.catalogue import Catalogue
from parts.design import Assumed, Chain, Design, Floats, Material
from parts.hardware import CapScrew, cap_screw_for_hole, cap_screws, dowel_diameters, preferred, retaining_ring
from parts.sizes import ChainEndSizes, ChainPinSizes, CrankPinSizes, DiscSizes, LinkSizes, Sizes, StopSizes
from parts.stack import Stack, make_stack
from parts.stop_layout import block_hole_offsets, stop_center

PLATE, BAR = "S690QL", "42CrMo4+QT"  # grades that parts are made of where the design names none
LEAST_LINK = 25.0  # link length over least thickness: a plate that is not bent in handling; common practice, no source
LEAST_BORE = 0.2  # of the crank radius; common practice, no source


class Ledger:
    """Collects what was assumed while the sizes are settled."""

    def __init__(self) -> None:
        self.rows: list[Assumed] = []

    def take(self, key: str, given: float | None, value: float, why: str, quantity: str = "length") -> float:
        """The given value, or the proportioned one with a line that says so."""
        if given is not None:
            return given
        self.rows.append(Assumed(key, value, quantity, why))
        return value

    def material(self, key: str, given: Material | None, name: str, catalogue: Catalogue) -> Material:
        if given is not None:
            return given
        self.rows.append(Assumed(key, name, "text", "grade in common use for such parts; common practice, no source"))
        return catalogue.materials[name]


@dataclass(frozen=True, slots=True)
class Demands:
    """Loads of one side over crank angle in the link frame of a ccw machine, shock and share in: N, shapes (3, n), (n)."""

    chain: Floats
    pin: Floats
    stop: Floats
    tension: Floats
    whole: Floats  # chain tension of the whole machine
    torque: Floats


def _demands(past: History, share: float, shock: float) -> Demands:
    s = past.state
    c, sn = np.cos(s.link_direction), np.sin(s.link_direction)

    def in_link(x: Floats, y: Floats) -> Floats:
        return np.stack([x * c + y * sn, -x * sn + y * c, np.zeros_like(x)]) * shock * share

    return Demands(
        in_link(-s.shaft_x, -s.shaft_y), in_link(s.pin_x, s.pin_y), s.stop_force * shock * share,
        s.tension * shock * share, s.tension * shock, s.torque * shock * share,
    )  # fmt: skip


def _first(candidates: Floats, use: Floats) -> float:
    """The first candidate whose use of its capacity is at most 1; the least used if there is none."""
    return float(candidates[_index(use)])


def _index(use: Floats) -> int:
    good = np.flatnonzero(use <= 1.0)
    return int(good[0] if good.size else np.argmin(use))


def _round_up(value: float, step: float) -> float:
    return math.ceil(value / step - 1e-9) * step


@dataclass(frozen=True, slots=True)
class _Pair:
    """Thickness of the link with the pins that go with it."""

    thickness: float
    crank: float
    chain: float
    middle: float
    use: float  # the largest share of a capacity that is used; above 1 no preferred size is enough

    @property
    def rank(self) -> tuple[float, float]:
        """What is enough comes first, then what is smallest."""
        return max(self.use, 1.0), max(self.crank, self.chain) ** 2 * self.thickness


class Proportioner:
    """Settles one design's sizes. Its parts are in the order in which one size needs another."""

    def __init__(self, design: Design, past: History, catalogue: Catalogue) -> None:
        self.design, self.past = design, past
        self.ledger = Ledger()
        self.step = 25.4 / 16.0 if design.identity.units == "us" else 1.0
        take, z = self.ledger.material, catalogue
        self.disc_material = take("disc.material", design.disc.material, PLATE, z)
        self.link_material = take("link.material", design.link.material, PLATE, z)
        self.crank_material = take("crank_pin.material", design.crank_pin.material, BAR, z)
        self.chain_pin_material = take("chain_pin.material", design.chain_pin.material, BAR, z)
        self.stop_material = take("stop.material", design.stop.material, BAR, z)
        self.end_material = take("chain_end.material", design.chain_end.material, BAR, z)
        gap = 0.5 if design.mechanism.link_length < 60.0 else 1.0
        self.gap = self.ledger.take(
            "clearances.plate_gap", design.plate_gap, gap, "running gap of such plates; common practice, no source"
        )
        t = design.targets
        self.ultimate, self.yields = t.ultimate, t.yield_
        self.pins = np.array(preferred("pin_diameters", design.identity.units))
        self.plates = np.array(preferred("plate_thicknesses", design.identity.units))

    def stack(self, end_width: float, link: float, disc: float) -> Stack:
        d = self.design
        return make_stack(
            d.mechanism.stack, d.targets.load_share, d.chain, end_width, self.gap, link, disc
        )

    def settle(self) -> tuple[Sizes, Stack, tuple[Assumed, ...]]:
        width, tongue, slots = self._end_width()
        first = self.stack(width, 10.0, 10.0)
        self.headed = first.crank_pin_headed
        self.loads = _demands(self.past, first.load_share, self.design.targets.shock_factor)
        pair = self._link_and_pins(width)
        link = self._link(pair, width)
        stop = self._stop(link)
        crank = self._crank_pin(pair)
        chain_pin = self._chain_pin(pair)
        end = self._chain_end(pair, chain_pin, width, tongue, slots)
        disc = self._disc(pair, link, stop, width)
        sizes = Sizes(self.gap, disc, link, stop, crank, chain_pin, end)
        return sizes, self.stack(width, link.thickness, disc.thickness), tuple(self.ledger.rows)

    # the chain's side

    def _end_width(self) -> tuple[float, float, tuple[tuple[float, float], ...]]:
        chain, wish = self.design.chain, self.design.chain_end
        if chain.kind == "roller":
            tongue = chain.tongue_width
            natural = (chain.strands - 1) * chain.strand_pitch + tongue
            width = self.ledger.take(
                "chain_end.width", wish.width, natural, "fills the room between the chain's outermost plates"
            )
            slots = strand_slots(chain.strands, chain.strand_pitch, tongue)
            if width > natural + 1e-9:
                slots = (*slots, (natural / 2.0, width / 2.0))
            return width, min(tongue, width), slots
        plates, finger = chain.lacing[1], math.floor(chain.tongue_width * 0.97 * 20.0) / 20.0
        slot = chain.plate_thickness * 1.05 + 0.1
        natural = (plates + 1) * finger + plates * slot
        width = self.ledger.take(
            "chain_end.width", wish.width, _round_up(natural, 0.5), "a finger beside each plate of the chain's last link"
        )
        return width, finger, leaf_slots(plates, finger, slot)

    def _link_and_pins(self, end_width: float) -> _Pair:
        wish = self.design
        if wish.link.thickness is not None:
            thicknesses = np.array([wish.link.thickness])
        else:
            least = max(3.0, wish.mechanism.link_length / LEAST_LINK)
            thicknesses = self.plates[self.plates >= least] if least <= self.plates[-1] else self.plates[-1:]
        pairs = []
        for t in (float(x) for x in thicknesses):
            crank, crank_use = self._crank_diameter(t, end_width)
            journal, middle, chain_use = self._chain_diameters(t, end_width)
            pairs.append(_Pair(t, crank, journal, middle, max(crank_use, chain_use)))
        best = min(pairs, key=lambda pair: pair.rank)
        take = self.ledger.take
        why = "smallest section at which the pins' shear, bending and bearing reach their targets"
        take("link.thickness", wish.link.thickness, best.thickness, "plate at which pins and link are smallest together")
        take("crank_pin.diameter", wish.crank_pin.diameter, best.crank, why)
        take("chain_pin.diameter", wish.chain_pin.diameter, best.chain, why)
        return best

    def _pin_use(self, d: Floats, material: Material, shear: float, moment: float) -> Floats:
        """Largest use of a pin held at one end, over diameters."""
        f_u = np.array([material.ultimate_strength(float(x)) for x in d])
        f_y = np.array([material.yield_strength(float(x)) for x in d])
        v = shear / pins.pin_shear_capacity(d, f_u)
        m = moment / pins.first_yield_bending_capacity(d, f_y)
        both = 1.0 / pins.shear_and_bending_factor(v, m)
        return np.maximum(np.maximum(v * self.ultimate, m * self.yields), both * self.yields)

    def _bearing_use(self, d: Floats, t: Floats | float, force: float, pin: Material, plate: Material, at: float, turns: bool) -> Floats:
        f_y = np.array([min(pin.yield_strength(float(x)), plate.yield_strength(at)) for x in d])
        capacity = eyes.turning_bearing(t, d, f_y) if turns else eyes.bearing(t, d, f_y)
        return np.asarray(force * self.yields / np.maximum(capacity, 1e-9))

    def _crank_diameter(self, t: float, end_width: float) -> tuple[float, float]:
        given = self.design.crank_pin.diameter
        d = np.array([given]) if given is not None else self.pins
        stack = self.stack(end_width, t, 10.0)
        couple = -stack.pin_root_arm * self.loads.pin + stack.chain_offset * self.loads.chain
        moment = float(np.max(np.linalg.norm(couple, axis=0)))
        force = float(np.max(np.linalg.norm(self.loads.pin, axis=0)))
        bearing_length = t - (_sink_depth(d) if self.headed else 0.0)
        use = self._pin_use(d, self.crank_material, force, moment)
        use = np.maximum(
            use, self._bearing_use(d, np.maximum(bearing_length, 0.0), force, self.crank_material, self.link_material, t, True)
        )
        if self.headed:  # four tenths of the plate stay under the head
            use = np.where(bearing_length < 0.4 * t, np.maximum(use, 1.0 + _sink_depth(d) / t), use)
        i = _index(use)
        return float(d[i]), float(use[i])

    def _chain_diameters(self, t: float, end_width: float) -> tuple[float, float, float]:
        """Journal in the link, middle under the chain end, and the larger use of the two."""
        given = self.design.chain_pin.diameter
        d = np.array([given]) if given is not None else self.pins
        m, whole = self.chain_pin_material, float(np.max(self.loads.whole))
        side = float(np.max(self.loads.tension))
        stack = self.stack(end_width, t, 10.0)
        middle = self.pins
        turning = self._bearing_use(middle, end_width, whole, m, self.end_material, end_width, True)
        if stack.chain_pin_support == "double shear":
            use = self._pin_use(d, m, side, side * t / 2.0)
            gap = (stack.chain_plane_width - end_width) / 2.0
            moment = float(pins.double_shear_moment(np.asarray(whole), t, end_width, gap))
            f_y = np.array([m.yield_strength(float(x)) for x in middle])
            f_u = np.array([m.ultimate_strength(float(x)) for x in middle])
            v = side / pins.pin_shear_capacity(middle, f_u)
            b = moment / pins.pin_bending_capacity(middle, f_y)
            both = 1.0 / pins.shear_and_bending_factor(v, b)
            later = moment / pins.replaceable_pin_bending_capacity(middle, f_y)
            middle_use = np.max([v * self.ultimate, b * self.yields, both * self.yields, later, turning], axis=0)
        else:
            use = self._pin_use(d, m, side, side * stack.chain_plane_width / 2.0)
            middle_use = np.maximum(self._pin_use(middle, m, side, side * end_width / 2.0), turning)
        use = np.maximum(use, self._bearing_use(d, t, side, m, self.link_material, t, False))
        i, k = _index(use), _index(middle_use)
        journal, wanted = float(d[i]), float(middle[k])
        if stack.chain_pin_support == "double shear":
            wanted = max(wanted, journal + 2.0 * max(1.5, 0.1 * journal))
        return journal, _next(self.pins, wanted), float(max(use[i], middle_use[k]))

    def _link(self, pair: _Pair, end_width: float) -> LinkSizes:
        t, m, f = pair.thickness, self.design.mechanism, self.loads
        stack = self.stack(end_width, t, 10.0)
        sink = float(_sink_depth(np.array(pair.crank))) if self.headed else 0.0
        least = max(1.7 * pair.crank, 1.7 * pair.chain, self._head(pair.crank) + 3.0 if self.headed else 0.0)
        w = np.arange(_round_up(least, self.step), least + 400.0, self.step)
        f_y, f_u = self.link_material.yield_strength(t), self.link_material.ultimate_strength(t)
        size = np.linalg.norm(f.pin, axis=0)
        towards_end = float(np.max(np.where(f.pin[0] <= 1e-9 * size, size, 0.0)))
        use = np.zeros_like(w)
        for d, thick, pull, tear in (
            (pair.crank, t - sink, float(np.max(-f.pin[0])), towards_end),
            (pair.chain, t, float(np.max(f.chain[0])), float(np.max(f.tension))),
        ):
            a = w / 2.0 - d / 2.0
            net = eyes.tensile_rupture(thick, eyes.effective_width(thick, a), f_u)
            out = eyes.shear_rupture(thick, a, d, f_u)
            use = np.max([use, pull * self.ultimate / net, tear * self.ultimate / out], axis=0)
        # transverse force stands against the distance to the flank, the same as to the end
        out_of_plane, torsion = stack.chain_offset * f.chain[0], stack.chain_offset * f.chain[1]
        bending = f.chain[1] * (m.link_length - m.stop_reach)
        thrust = max(0.0, float(np.max(-f.chain[0])))
        for i, width in enumerate(w):
            stress = section_stress(f.chain[0], bending, out_of_plane, torsion, float(width), t)
            strut = min(
                float(column_stress(m.link_length * math.sqrt(12.0) / depth, f_y, self.link_material.youngs_modulus))
                for depth in (t, float(width))
            ) * width * t  # fmt: skip
            euler = math.pi**2 * self.link_material.youngs_modulus * width * t**3 / (12.0 * m.link_length**2)
            growth = 1.0 / max(1e-6, 1.0 - self.yields * thrust / euler)
            couple = growth * 6.0 * float(np.max(np.abs(np.where(f.chain[0] < 0.0, out_of_plane, 0.0)))) / (width * t**2)
            both = thrust / (width * t) + (couple if stack.chain_offset else 0.0)
            use[i] = max(use[i], float(np.max(stress)) * self.yields / f_y, thrust * self.yields / strut, both * self.yields / f_y)
            if use[i] <= 1.0:
                break
        else:
            i = int(np.argmin(use))
        width = self.ledger.take(
            "link.width", self.design.link.width, float(w[i]),
            "least width at which eyes, section at the stop and strut reach their targets",
        )  # fmt: skip
        head = self._head(pair.crank) if self.headed else 0.0
        return LinkSizes(width, t, head + 1.0 if self.headed else 0.0, sink, self.link_material)

    def _head(self, crank: float) -> float:
        return _round_up(1.4 * crank, 0.5)

    def _crank_pin(self, pair: _Pair) -> CrankPinSizes:
        head = self._head(pair.crank) if self.headed else 0.0
        thick = float(_sink_depth(np.array(pair.crank))) - 0.3 if self.headed else 0.0
        return CrankPinSizes(pair.crank, head, thick, self.crank_material)

    def _chain_pin(self, pair: _Pair) -> ChainPinSizes:
        ring = retaining_ring(pair.middle)
        collar = _round_up(max(1.35 * pair.chain, pair.middle + 3.0), 0.5)
        return ChainPinSizes(
            pair.chain, pair.middle, collar, ring.groove_diameter, ring.groove_width,
            max(1.5 * ring.groove_width, pair.middle - ring.groove_diameter), self.chain_pin_material,
        )  # fmt: skip

    def _chain_end(
        self, pair: _Pair, pin: ChainPinSizes, width: float, tongue: float, slots: tuple[tuple[float, float], ...]
    ) -> ChainEndSizes:
        chain, wish = self.design.chain, self.design.chain_end
        own = self.ledger.take("chain_end.pin_diameter", wish.pin_diameter, chain.pin_diameter, "the chain's own pin")
        force = float(np.max(self.loads.whole))
        f_u = self.end_material.ultimate_strength(width)
        meat = width - 2.0 * sum(b - a for a, b in slots)
        least = max(1.6 * pair.middle, 2.0 * own, chain.plate_height if slots else 0.0)
        h = np.arange(_round_up(least, self.step), least + 300.0, self.step)
        use = np.zeros_like(h)
        for d, t in ((pair.middle, width), (own, meat)):
            a = h / 2.0 - d / 2.0
            net = eyes.tensile_rupture(t, eyes.effective_width(t, a), f_u)
            out = eyes.shear_rupture(t, a, d, f_u)
            use = np.max([use, force * self.ultimate / net, force * self.ultimate / out], axis=0)
        height = _first(h, use)
        reach = 0.525 * chain.plate_height + 1.0
        beside = max(pair.middle / 2.0 + 0.35 * pair.middle, pin.collar_diameter / 2.0 + 2.0)
        length = math.ceil((beside + reach) / chain.pitch) * chain.pitch
        return ChainEndSizes(width, height, length, own, tongue, slots, height / 2.0 + reach, self.end_material)

    # the stop

    def _stop(self, link: LinkSizes) -> StopSizes:
        wish = self.design.stop
        force = float(np.max(self.loads.stop))
        arm, depth = self.gap + link.thickness / 2.0, link.thickness
        height = self.ledger.take(
            "stop.height", wish.height, self.gap + link.thickness, "as high as the link's face towards the chain"
        )
        d = np.array([wish.diameter]) if wish.diameter is not None else self.pins[self.pins >= min(6.0, self.pins[-1])]
        weaker = np.array(
            [min(self.stop_material.yield_strength(float(x)), self.link_material.yield_strength(depth)) for x in d]
        )
        modulus = contact_modulus(self.stop_material, self.link_material)
        contact = np.array(
            [float(line_contact_yield_force(depth, x / 2.0, modulus, float(f))) for x, f in zip(d, weaker, strict=True)]
        )
        use = np.maximum(self._pin_use(d, self.stop_material, force, force * arm), force * self.yields / contact)
        post = _first(d, use)
        fits = bool(np.min(use) <= 1.0) and post <= 1.25 * link.width
        style = wish.style
        if style is None:
            style = "post" if fits or wish.diameter is not None else "block"
            self.ledger.rows.append(
                Assumed(
                    "stop.style", style, "text",
                    "a post while one no thicker than 1.25 of the link's width bears the contact, else a block",
                )
            )  # fmt: skip
        if style == "post":
            diameter = self.ledger.take(
                "stop.diameter", wish.diameter, post, "smallest at which contact, shear and bending reach their targets"
            )
            return StopSizes("post", diameter, 0.0, 0.0, height, 0.0, "", 0.0, 0.0, self.stop_material)
        return self._block(force, arm, depth, height)

    def _block(self, force: float, arm: float, depth: float, height: float) -> StopSizes:
        wish, material = self.design.stop, self.stop_material
        m = self.design.mechanism
        dowels = np.array(dowel_diameters())
        f_u = np.array([material.ultimate_strength(3.0 * float(x)) for x in dowels])
        dowel = _first(dowels, force * self.ultimate / (2.0 * pins.pin_shear_capacity(dowels, f_u)))
        widths = np.arange(_round_up(max(2.4 * dowel, 8.0), self.step), 200.0, self.step)
        for width in widths if wish.width is None else [wish.width]:
            tension = force * arm / (width / 2.0) * self.yields
            bolt = next(
                (s for s in cap_screws() if 2.0 * s.stress_area * s.yield_strength >= tension), cap_screws()[-1]
            )
            f_y = material.yield_strength(float(width))
            weaker = min(f_y, self.link_material.yield_strength(depth))
            length = max(
                6.0 * force * arm * self.yields / (f_y * width**2),
                force * self.yields / (weaker * depth),
                1.5 * force * math.sqrt(3.0) * self.yields / (f_y * width),
                7.2 * dowel, 6.2 * bolt.diameter, (0.5 * (dowel + bolt.clearance_hole) + 3.0) / 0.23,
            )  # fmt: skip
            room = 2.0 * min(m.stop_reach, m.link_length - m.stop_reach)
            if bolt.diameter * 2.0 <= width and length <= min(room, 4.0 * width):
                break
        why = "least foot at which dowels, bolts and bending reach their targets"
        width = self.ledger.take("stop.width", wish.width, float(width), why)
        length = self.ledger.take("stop.length", wish.length, _round_up(length, self.step), why)
        return StopSizes(
            "block", 0.0, length, width, height, dowel, bolt.thread, bolt.clearance_hole, bolt.tapping_hole, material
        )

    # the disc

    def _disc(self, pair: _Pair, link: LinkSizes, stop: StopSizes, end_width: float) -> DiscSizes:
        wish, f, take = self.design.disc, self.loads, self.ledger.take
        seat = max(0.6 * pair.crank, 0.6 * stop.diameter)
        pin = float(np.max(np.linalg.norm(f.pin, axis=0)))
        pull, torque = float(np.max(f.tension)), float(np.max(np.abs(f.torque)))
        count = int(take("disc.bolt_count", wish.bolt_count, 6, "bolts on a drive hub of this size; common practice, no source", "count"))
        plates = np.array([wish.thickness]) if wish.thickness is not None else self.plates[self.plates >= seat]
        for t in plates if plates.size else self.plates[-1:]:
            stack = self.stack(end_width, link.thickness, float(t))
            tilt = pull * (stack.disc_back - stack.link_middle + stack.chain_offset)
            bore = wish.bore if wish.bore is not None else self._bore(tilt, pull)
            screw = self._hub_bolt(count, bore, tilt, pull, torque, wish.bolt_hole)
            bearing = self._bearing_use(
                np.array([pair.crank]), float(t), pin, self.crank_material, self.disc_material, float(t), False
            )
            if (screw.head_height + 0.5) <= 0.7 * t and float(bearing[0]) <= 1.0:
                break
        thickness = take(
            "disc.thickness", wish.thickness, float(t), "plate that holds the pins by 0.6 of their diameter and sinks the hub bolts' heads"
        )
        bore = take("disc.bore", wish.bore, bore, "spigot of a hub on a shaft that bears the tilting moment at its target")
        hole = take("disc.bolt_hole", wish.bolt_hole, screw.clearance_hole, "clearance hole of the hub bolt that bears torque, pull and tilt")
        sink = screw.counterbore_diameter
        circle, phase = self._bolt_layout(pair, link, stop, bore, sink, count)
        circle = take("disc.bolt_circle", wish.bolt_circle, circle, "smallest circle that leaves webs to bore, pin hole and stop")
        phase = take("disc.bolt_phase", wish.bolt_phase, phase, "turned to where the webs between the holes are widest", "angle")
        outer = take(
            "disc.outer_diameter", wish.outer_diameter, self._outer(pair, link, stop, circle, sink, thickness, pin),
            "rim that leaves the crank pin's eye, the stop and the hub bolts their edge distance",
        )  # fmt: skip
        return DiscSizes(
            outer, thickness, bore, circle, count, hole, phase, screw.thread, sink, screw.head_height + 0.5, self.disc_material
        )

    def _bore(self, tilt: float, pull: float) -> float:
        least = max(10.0, LEAST_BORE * self.design.mechanism.crank_radius)
        d = self.pins[self.pins >= min(least, self.pins[-1])]
        f_y = np.array([self.crank_material.yield_strength(float(x)) for x in d])
        # the first bearing stands about one diameter behind the disc
        use = (tilt + pull * d) * self.yields / pins.first_yield_bending_capacity(d, f_y)
        return _first(d, use)

    def _hub_bolt(
        self, count: int, bore: float, tilt: float, pull: float, torque: float, given: float | None
    ) -> CapScrew:
        if given is not None:
            return cap_screw_for_hole(given)
        for screw in cap_screws():
            circle = bore + 2.2 * screw.counterbore_diameter
            tension = 4.0 * tilt / (count * circle) * self.yields
            shear = (pull / count + 2.0 * torque / (count * circle)) * self.yields
            capacity = screw.stress_area * screw.yield_strength
            if math.hypot(tension / capacity, shear / (capacity / math.sqrt(3.0))) <= 1.0:
                return screw
        return cap_screws()[-1]

    def _stop_holes(self, link: LinkSizes, stop: StopSizes) -> list[tuple[float, float, float]]:
        """x, y and diameter of the stop's holes in the disc of a ccw machine."""
        (x, y), direction = stop_center(self.design.mechanism, link.width, stop)
        if stop.style == "post":
            return [(x, y, stop.diameter)]
        c, s = math.cos(direction), math.sin(direction)
        return [(x + along * c, y + along * s, d) for along, d in block_hole_offsets(stop)]

    def _bolt_layout(
        self, pair: _Pair, link: LinkSizes, stop: StopSizes, bore: float, sink: float, count: int
    ) -> tuple[float, float]:
        wish = self.design.disc
        others = [(self.design.mechanism.crank_radius, 0.0, pair.crank), *self._stop_holes(link, stop)]
        least = bore + sink + 2.0 * max(2.0, 0.25 * max(bore, sink)) + 2.0
        circles = np.arange(_round_up(least, 2.0), least + 4.0 * self.design.mechanism.link_length, 2.0)
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
        self, pair: _Pair, link: LinkSizes, stop: StopSizes, circle: float, sink: float, t: float, pin: float
    ) -> float:
        r, f_u = self.design.mechanism.crank_radius, self.disc_material.ultimate_strength(t)
        tear = pin * self.ultimate / (1.2 * f_u * t) - pair.crank / 2.0
        net = pin * self.ultimate / (2.0 * t * f_u)
        edge = max(0.6 * pair.crank, tear, net, 4.0)
        rim = r + pair.crank / 2.0 + edge
        (x, y), direction = stop_center(self.design.mechanism, link.width, stop)
        if stop.style == "post":
            rim = max(rim, math.hypot(x, y) + stop.diameter / 2.0 + max(0.4 * stop.diameter, 4.0))
        else:
            along, across = stop.length / 2.0, stop.width / 2.0
            rim = max(rim, _farthest(x, y, direction, along, across) + 3.0)
        rim = max(rim, circle / 2.0 + sink / 2.0 + max(3.0, 0.3 * sink))
        return _round_up(2.0 * rim, 5.0 * self.step)


def _farthest(x: float, y: float, direction: float, along: float, across: float) -> float:
    """Distance of the farthest corner of a block from the origin."""
    c, s = math.cos(direction), math.sin(direction)
    corners = [(x + a * c - b * s, y + a * s + b * c) for a in (along, -along) for b in (across, -across)]
    return max(math.hypot(*corner) for corner in corners)


def _sink_depth(d: Floats) -> Floats:
    """Depth (mm) of the sink for the crank pin's head: a quarter of the pin and room below the face."""
    return np.asarray(np.maximum(2.0, np.round(0.22 * d * 2.0) / 2.0) + 0.3)


def _next(sizes: Floats, wanted: float) -> float:
    above = sizes[sizes >= wanted - 1e-9]
    return float(above[0]) if above.size else wanted


def leaf_slots(plates: int, finger: float, slot: float) -> tuple[tuple[float, float], ...]:
    """Where the slots for a leaf chain's plates lie, as distances from the block's middle (mm), both sides alike.

    ``plates`` slots with a finger between each two; an odd number has one in the middle.
    """
    rows = [(0.0, slot / 2.0)] if plates % 2 else []
    at = slot / 2.0 + finger if plates % 2 else finger / 2.0
    for _ in range(plates // 2):
        rows.append((at, at + slot))
        at += slot + finger
    return tuple(rows)


def strand_slots(strands: int, pitch: float, tongue: float) -> tuple[tuple[float, float], ...]:
    """Slots between the tongues of a roller chain's strands, as distances from the block's middle (mm)."""
    if strands == 1:
        return ()
    gap = pitch - tongue
    if strands % 2 == 0:
        return ((0.0, gap / 2.0),)
    return ((tongue / 2.0, tongue / 2.0 + gap),)


def proportion(design: Design, past: History, catalogue: Catalogue) -> tuple[Sizes, Stack, tuple[Assumed, ...]]:
    """All sizes of a design, its stack, and what was assumed on the way."""
    return Proportioner(design, past, catalogue).settle()


__all__ = ["Chain", "leaf_slots", "proportion"]
