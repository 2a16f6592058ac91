"""Proportions of the link, its pins and the chain end."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np

from loads.checks import eyes, pins, press
from loads.checks.link import link_rules
from loads.checks.link_sections import LinkShape
from loads.far_ends.behaviour import PlateUse
from loads.far_ends.flexible import bridge_depth
from loads.far_ends.registry import behaviour
from loads.practice import value
from loads.proportions.basis import (
    LEAST_LINK,
    LEAST_WIDTH,
    LOOK_AT,
    Basis,
    Pair,
    first,
    index,
    next_up,
    round_up,
    sink_depth,
)
from parts.contact_lengths import chain_pin_in_link, crank_pin_in_link
from parts.design import Assumed, Floats
from parts.far_ends.base import EndForm
from parts.fits import covers, interference
from parts.hardware import retaining_ring
from parts.sizes import ChainEndSizes, ChainPinSizes, CrankPinSizes, LinkSizes

# the loosest fits that are chosen where the design names none: a pin that runs, and one that lies close or is pressed in
RUNNING, CLOSE = "H8/f7", "H7/h6"


class LinkSide(Basis):
    """Chain end, link and pins, in the order in which one size needs another."""

    def _end_form(self) -> EndForm:
        """The plate on the chain pin as the far end asks for it, as wide as the design has it."""
        far, wish = self.design.far_end, self.design.chain_end
        form = far.end_form()
        use = behaviour(self.design).plate_use
        if use is not None:
            return self._tie_form(form, use)
        width = self.ledger.take(f"{far.part}.width", wish.width, form.width, form.why)
        slots = form.slots
        # beside tongues that fill the room a wider plate is relieved; fingers and cheeks stay what they are
        if far.tongues and width > form.width + 1e-9:
            slots = (*slots, (form.width / 2.0, width / 2.0))
        return replace(form, width=width, tongue=min(form.tongue, width), slots=slots)

    def _tie_form(self, form: EndForm, use: PlateUse) -> EndForm:
        """A tie's thickness: the least at which it is strong enough four times as wide as it is thick."""
        far, steel, wish = self.design.far_end, self.end_material, self.design.chain_end
        plates = self.within(self.plates, steel)
        plates = plates[plates >= far.length_of_plate / LEAST_LINK / 4.0] if plates.size else plates
        uses = np.array([float(use(self.design, t, np.array([4.0 * t]), steel, self.loads.whole)[0]) for t in plates])
        best = float(plates[index(uses)]) if plates.size else float(self.plates[0])
        why = "least at which a width of four thicknesses carries pull and push"
        width = self.ledger.take(f"{far.part}.thickness", wish.width, best, why)
        return replace(form, width=width, tongue=width)

    def _link_and_pins(self, end_width: float, thickness: float = 0.0) -> Pair:
        """Plate and pins that are smallest together, of plates of at least ``thickness`` mm."""
        wish = self.design
        if wish.link.thickness is not None:
            thicknesses = np.array([wish.link.thickness])
        else:
            least = max(3.0, wish.mechanism.link_length / LEAST_LINK, thickness)
            plates = self.within(self.plates, self.link_material)
            thicknesses = plates[plates >= least] if least <= plates[-1] else plates[-1:]
            thicknesses = self.from_floor(thicknesses, "link.thickness")
        pairs = []
        for t in (float(x) for x in thicknesses):
            crank, crank_use = self._crank_diameter(t, end_width)
            journal, middle, chain_use = self._chain_diameters(t, end_width)
            pairs.append(Pair(t, crank, journal, middle, 0.0, max(crank_use, chain_use)))
        # the width takes longer to find: only of those whose pins are small and enough
        pairs = sorted(pairs, key=lambda pair: pair.rank)[:LOOK_AT]
        wide = []
        for pair in pairs:
            width, use = self._width(pair, end_width)
            wide.append(replace(pair, width=width, use=max(pair.use, use)))
        best = min(wide, key=lambda pair: pair.rank)
        take = self.ledger.take
        why = "smallest section at which the pins' shear, bending and bearing reach their targets"
        take(
            "link.thickness", wish.link.thickness, best.thickness, "plate at which pins and link are smallest together"
        )
        take("crank_pin.diameter", wish.crank_pin.diameter, best.crank, why)
        take("chain_pin.diameter", wish.chain_pin.diameter, best.chain, why)
        return best

    def _crank_diameter(self, t: float, end_width: float) -> tuple[float, float]:
        given = self.design.crank_pin.diameter
        there_are = self.from_floor(self.within(self.pins, self.crank_material), "crank_pin.diameter")
        d = np.array([given]) if given is not None else there_are
        stack = self.stack(end_width, t, 10.0)
        couple = -stack.pin_root_arm * self.loads.pin + stack.chain_offset * self.loads.chain
        moment = float(np.max(np.linalg.norm(couple, axis=0)))
        force = float(np.max(np.linalg.norm(self.loads.pin, axis=0)))
        sink = sink_depth(d) if self.headed else np.zeros_like(d)
        touch = np.array([crank_pin_in_link(float(x), t, float(z), self.headed) for x, z in zip(d, sink, strict=True)])
        pressed = self._pressed(self.loads.pin, stack.chain_offset, touch)
        use = self.pin_use(d, self.crank_material, force, moment)
        use = np.maximum(use, self.bearing_use(d, touch, pressed, self.crank_material, self.link_material, t, True))
        if self.headed:  # four tenths of the plate stay under the head
            use = np.where(touch < 0.4 * t, np.maximum(use, 1.0 + sink / t), use)
        i = index(use)
        return float(d[i]), float(use[i])

    def _pressed(self, force: Floats, offset: float, touch: Floats) -> Floats:
        """Largest force (m) at the harder pressed end of eyes ``touch`` (m) mm long that take the chain's offset couple."""
        couple = offset * np.stack([-self.loads.chain[1], self.loads.chain[0], np.zeros_like(self.loads.torque)])
        return np.asarray(np.max(eyes.end_pressed_force(force, couple, touch), axis=-1))

    def _chain_diameters(self, t: float, end_width: float) -> tuple[float, float, float]:
        """Journal in the link, middle under the chain end, and the larger use of the two."""
        given = self.design.chain_pin.diameter
        pins_there_are = self.within(self.pins, self.chain_pin_material)
        d = np.array([given]) if given is not None else self.from_floor(pins_there_are, "chain_pin.diameter")
        m, whole = self.chain_pin_material, float(np.max(self.loads.whole))
        side = float(np.max(self.loads.tension))
        stack = self.stack(end_width, t, 10.0)
        middle = self.from_floor(pins_there_are, "chain_pin.middle_diameter")
        turning = self.bearing_use(middle, end_width, whole, m, self.end_material, end_width, True)
        if stack.chain_pin_support == "double shear":
            use = self.pin_use(d, m, side, side * t / 2.0)
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
            use = self.pin_use(d, m, side, side * stack.chain_plane_width / 2.0)
            middle_use = np.maximum(self.pin_use(middle, m, side, side * end_width / 2.0), turning)
        touch = np.array([chain_pin_in_link(float(x), t) for x in d])
        pressed = self._pressed(self.loads.chain, stack.chain_offset, touch)
        use = np.maximum(use, self.bearing_use(d, touch, pressed, m, self.link_material, t, False))
        k = index(middle_use)
        if stack.chain_pin_support == "cantilever":
            use = np.maximum(use, self._seat_turning_use(d, touch, stack.chain_offset, float(middle[k])))
        i = index(use)
        journal, wanted = float(d[i]), float(middle[k])
        if stack.chain_pin_support == "double shear":
            wanted = max(wanted, journal + 2.0 * max(1.5, 0.1 * journal))
        return journal, next_up(self.pins, wanted), float(max(use[i], middle_use[k]))

    def _seat_turning_use(self, d: Floats, touch: Floats, offset: float, middle: float) -> Floats:
        """What a pin pressed into the link uses, over diameters, of what holds it against the chain end's friction.

        At the largest pull, where it is most; the fit in the narrowest ring that a link of its width can be.
        """
        outer, inner, given = self.link_material, self.chain_pin_material, self.design.fits.chain_pin_link
        force = float(np.max(self.loads.whole))
        torque = force * self.design.friction.chain_pin * middle / 2.0
        grip = np.asarray(press.seat_grip(np.asarray(force), np.asarray(offset * force), np.maximum(touch, 1e-9)))
        for i, x in enumerate(map(float, d)):
            if covers(x):
                fit = given or self._press_fit(x, outer, inner)
                least = press.effective_interference(interference(fit, x)[0])
                ring = self.design.link.width or max(2.0 * x, self.least("link.width"))
                pressure = press.fit_pressure(least, x, max(ring, 1.02 * x), outer, inner)
                grip[i] = max(grip[i], float(press.holding_force(pressure, x, float(touch[i]), 1.0)))
        return np.asarray(torque * value("press", "holding_target") / (value("press", "friction") * grip * d / 2.0))

    def _width(self, pair: Pair, end_width: float) -> tuple[float, float]:
        """Least width of the link (mm), and the share of a capacity that it uses there."""
        least = max(
            2.0 * pair.crank,
            2.0 * pair.chain,
            self.design.mechanism.link_length / LEAST_WIDTH,
            self.least_width,
            self.least("link.width"),
            1.5 * self._head(pair.crank) + 1.5 if self.headed else 0.0,
        )
        widths = np.arange(round_up(least, self.step), least + 400.0, self.step)
        if self.design.link.width is not None:
            widths = np.array([self.design.link.width])
        low, high = 0, len(widths) - 1
        if high == 0 or self._width_use(float(widths[0]), pair, end_width) <= 1.0:
            high = 0
        elif self._width_use(float(widths[high]), pair, end_width) > 1.0:
            low = high
        while low < high:  # every use falls as the link gets wider; a few crank angles bring it near
            middle = (low + high) // 2
            if self._width_use(float(widths[middle]), pair, end_width, 8) <= 1.0:
                high = middle
            else:
                low = middle + 1
        while (use := self._width_use(float(widths[high]), pair, end_width)) > 1.0 and high + 1 < len(widths):
            high += 1
        return float(widths[high]), use

    def _width_use(self, w: float, pair: Pair, end_width: float, every: int = 1) -> float:
        """Largest use of a link ``w`` mm wide: eyes, sections from pin to pin, strut, sideways buckling.

        At each crank angle, or at one in ``every``.
        """
        t, m, f = pair.thickness, self.design.mechanism, self.loads
        pin, chain = f.pin[:, ::every], f.chain[:, ::every]
        sink = float(sink_depth(np.array(pair.crank))) if self.headed else 0.0
        f_y, fits = self.link_material.yield_strength(t), self.design.fits
        eye = max(
            self._eye_use(w, pair.crank, t - sink, t, fits.crank_pin_link or RUNNING, -pin, pair.chain),
            self._eye_use(w, pair.chain, t, t, fits.chain_pin_link or CLOSE, chain, pair.crank),
        )
        if eye > 1.0:
            return eye
        head = self._head(pair.crank) + 1.0 if self.headed else 0.0
        shape = LinkShape(m.link_length, m.stop_reach, w, t, pair.crank, pair.chain, head, sink)
        offset = self.stack(end_width, t, 10.0).chain_offset
        couple = offset * np.stack([-chain[1], chain[0], np.zeros_like(chain[0])])
        rules = link_rules(shape, f_y, self.link_material.youngs_modulus, self.yields, chain, couple, -pin - chain)
        return max(eye, *(float(np.max(r.demand)) * self.yields / r.capacity for r in rules))

    def _eye_use(self, w: float, d: float, thick: float, plate: float, fit: str, force: Floats, other: float) -> float:
        """Largest use of an eye with a round end ``w`` mm wide; ``force`` (3, n) on it with x away from the link's body."""
        f_y, f_u = self.link_material.yield_strength(plate), self.link_material.ultimate_strength(plate)
        size = np.hypot(force[0], force[1])
        room, thick = max(0.0, w / 2.0 - d / 2.0), max(thick, 1e-9)
        sine = np.abs(force[1]) / np.maximum(size, 1e-300)
        inwards = np.minimum(
            w / 2.0 / np.maximum(sine, 1e-9) - d / 2.0, self.design.mechanism.link_length - (d + other) / 2.0
        )
        around = eyes.Around(np.where(force[0] >= -1e-9 * size, room, np.maximum(inwards, room)), room, room)
        play, pull = eyes.largest_play(fit, d), np.maximum(0.0, force[0])
        uses = [
            float(np.max((pull if r.of_pull else size) / np.maximum(r.capacity, 1e-9)))
            * (self.yields if r.by_yield else self.ultimate)
            for r in eyes.eye_rules(thick, d, play, f_y, f_u, around)
        ]
        oblique = eyes.eye_oblique_use(thick, d, play, f_y, f_u, around, pull, force[1])
        return max(*uses, float(np.max(oblique)) * self.yields)

    def _link(self, pair: Pair) -> LinkSizes:
        sink = float(sink_depth(np.array(pair.crank))) if self.headed else 0.0
        width = self.ledger.take(
            "link.width", self.design.link.width, pair.width,
            "least width at which eyes, section at the stop and strut reach their targets",
        )  # fmt: skip
        return LinkSizes(
            width, pair.thickness, self._head(pair.crank) + 1.0 if self.headed else 0.0, sink, self.link_material
        )

    def _head(self, crank: float) -> float:
        return round_up(1.4 * crank, 0.5)

    def _crank_pin(self, pair: Pair) -> CrankPinSizes:
        head = self._head(pair.crank) if self.headed else 0.0
        thick = float(sink_depth(np.array(pair.crank))) - 0.3 if self.headed else 0.0
        return CrankPinSizes(pair.crank, head, thick, self.crank_material)

    def _chain_pin(self, pair: Pair) -> ChainPinSizes:
        ring = retaining_ring(pair.middle)
        collar = round_up(max(1.35 * pair.chain, pair.middle + 3.0), 0.5)
        return ChainPinSizes(
            pair.chain, pair.middle, collar, ring.groove_diameter, ring.groove_width,
            max(1.5 * ring.groove_width, pair.middle - ring.groove_diameter), self.chain_pin_material,
        )  # fmt: skip

    def _chain_end(self, pair: Pair, pin: ChainPinSizes, form: EndForm) -> ChainEndSizes:
        """The plate on the chain pin."""
        far, wish, width = self.design.far_end, self.design.chain_end, form.width
        own = self._own_pin(form)
        pull = self.loads.whole
        force = float(np.max(pull))
        f_y, f_u = self.end_material.yield_strength(width), self.end_material.ultimate_strength(width)
        meat = width - 2.0 * sum(b - a for a, b in form.slots)
        least = max(1.6 * pair.middle, 2.0 * own, form.least_height, self.least("chain_end.height"))
        h = np.arange(round_up(least, self.step), least + 300.0, self.step)
        use = np.zeros_like(h)
        hangs = self.design.fits.chain_end or RUNNING
        for d, t, fit in ((pair.middle, width, hangs), (own, meat, eyes.CHAINS_OWN_PIN)):
            a = h / 2.0 - d / 2.0
            around = eyes.Around(a, a, a)
            for rule in eyes.eye_rules(t, d, eyes.largest_play(fit, d), f_y, f_u, around):
                target = self.yields if rule.by_yield else self.ultimate
                use = np.maximum(use, force * target / np.maximum(rule.capacity, 1e-9))
        as_plate = behaviour(self.design).plate_use
        if as_plate is not None:
            use = np.maximum(use, as_plate(self.design, width, h, self.end_material, pull))
        height = wish.height if wish.height is not None else first(h, use)
        if as_plate is not None and wish.height is None:
            why = "least at which eyes, section and strut reach their targets"
            self.ledger.rows.append(Assumed(f"{far.part}.width", height, "length", why))
        reach = form.reach + form.reach_of_pin * own
        beside = max(pair.middle / 2.0 + 0.35 * pair.middle, pin.collar_diameter / 2.0 + 2.0)
        span = far.pin_span(width, form.slots, self.gap)
        if form.slots and span is not None:
            beside = max(beside, pair.middle / 2.0 + bridge_depth(force, width, span[0], height, f_y / self.yields))
        length = far.length_of_plate or math.ceil((beside + reach) / form.step) * form.step
        return ChainEndSizes(
            width, height, length, own, form.tongue, form.slots, height / 2.0 + reach, self.end_material
        )

    def _own_pin(self, form: EndForm) -> float:
        """Diameter of the pin that joins the far end to the plate: its own, or one sized in double shear."""
        far, wish = self.design.far_end, self.design.chain_end
        span = far.pin_span(form.width, form.slots, self.gap)
        key = f"{far.part}.pin_diameter"
        if span is None:
            return self.ledger.take(key, wish.pin_diameter, far.pin_diameter, f"the {far.noun}'s own pin")
        force = float(np.max(self.loads.whole))
        d = self.from_floor(self.within(self.pins, self.chain_pin_material), "chain_end.pin_diameter")
        moment = float(pins.double_shear_moment(np.asarray(force), *span))
        use = self.double_shear_use(d, self.chain_pin_material, force / 2.0, moment)
        plate = self.end_material
        use = np.maximum(
            use, self.bearing_use(d, 2.0 * span[0] if form.slots else form.width, force, self.chain_pin_material, plate,
                                  form.width, False)
        )  # fmt: skip
        why = "smallest at which shear, bending and bearing reach their targets"
        return self.ledger.take(key, wish.pin_diameter, float(d[index(use)]), why)
