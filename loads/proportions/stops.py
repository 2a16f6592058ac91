"""Proportions of the stop: a post where one is enough, else a block."""

from __future__ import annotations

import math

import numpy as np

from loads.checks import eyes, pins
from loads.checks.disc import preload
from loads.checks.stop import (
    bolt_share,
    contact_modulus,
    least_case_depth,
    line_contact_yield_force,
    stripping,
    t_stub_capacity,
)
from loads.practice import value
from loads.proportions.basis import Basis, first, round_up
from parts.contact_lengths import stop_on_link
from parts.design import Assumed, Material
from parts.hardware import CapScrew, cap_screws, dowel_diameters
from parts.sizes import LinkSizes, StopSizes
from parts.stop_layout import block_hole_offsets, stop_center


class StopSide(Basis):
    """The stop, and where its holes are in the disc."""

    def _stop(self, link: LinkSizes, bore: float) -> StopSizes:
        wish = self.design.stop
        force = float(np.max(self.loads.stop))
        arm, depth = self.gap + link.thickness / 2.0, link.thickness
        height = self.ledger.take(
            "stop.height", wish.height, self.gap + link.thickness, "as high as the link's face towards the chain"
        )
        d = self.within(self.pins[self.pins >= min(6.0, self.pins[-1])], self.stop_material)
        d = self.from_floor(d, "stop.diameter")
        if wish.diameter is not None:
            d = np.array([wish.diameter])
        weaker = np.array(
            [min(self.stop_material.surface_strength(float(x)), self.link_material.surface_strength(depth)) for x in d]
        )
        modulus = contact_modulus(self.stop_material, self.link_material)
        touch = [stop_on_link("post", float(x), height, depth, self.gap) for x in d]
        contact = np.array(
            [
                float(line_contact_yield_force(t, x / 2.0, modulus, float(f)))
                for t, x, f in zip(touch, d, weaker, strict=True)
            ]
        )
        use = np.maximum(
            self.pin_use(d, self.stop_material, force, force * arm), force * self.yields / np.maximum(contact, 1e-9)
        )
        case = min(
            (m.case_depth for m in (self.stop_material, self.link_material) if m.case_depth is not None), default=None
        )
        if case is not None:
            wanted = [float(least_case_depth(force, t, x / 2.0, modulus)) for t, x in zip(touch, d, strict=True)]
            use = np.maximum(use, np.array(wanted) / case)
        post = first(d, use)
        if wish.style is not None:
            style = wish.style
        else:
            seat = StopSizes("post", post, 0.0, 0.0, height, 0.0, "", 0.0, 0.0, self.stop_material)
            fits = bool(np.min(use) <= 1.0) and post <= 1.25 * link.width and self.clears_bore(seat, link, bore)
            style = "post" if fits else "block"
            why = "a post where one of at most 1.25 of the link's width bears the contact and clears the bore"
            # larger sizes for the sake of something else leave it the kind of stop that it was
            post_was, block_was = self.least("stop.diameter") > 0.0, self.least("stop.dowel_diameter") > 0.0
            if post_was or block_was:
                style, why = "post" if post_was else "block", f"{why}, of the sizes that loads alone ask for"
            self.ledger.rows.append(Assumed("stop.style", style, "text", why))
        if style == "post":
            diameter = self.ledger.take(
                "stop.diameter", wish.diameter, post, "smallest at which contact, shear and bending reach their targets"
            )
            return StopSizes("post", diameter, 0.0, 0.0, height, 0.0, "", 0.0, 0.0, self.stop_material)
        return self._block(force, arm, height, link, bore)

    def _block(self, force: float, arm: float, height: float, link: LinkSizes, bore: float) -> StopSizes:
        wish, material = self.design.stop, self.block_material
        m, depth = self.design.mechanism, link.thickness
        dowels, f_ub = self.from_floor(np.array(dowel_diameters()), "stop.dowel_diameter"), value("bolts", "ultimate")
        screws = [s for s in cap_screws() if s.clearance_hole >= self.least("stop.bolt_hole") - 1e-9]
        room = 2.0 * min(m.stop_reach, m.link_length - m.stop_reach)
        widths = list(self.within(np.arange(round_up(8.0, self.step), 200.0, self.step), material))
        widths = list(self.from_floor(np.array(widths), "stop.width"))
        if wish.width is not None:
            widths = [wish.width]
        spare: tuple[bool, float, float, float, CapScrew] | None = None
        for width in (float(x) for x in widths):
            shear = 2.0 * pins.pin_shear_capacity(dowels, material.ultimate_strength(width))
            dowel = first(dowels, force * self.ultimate / shear)
            tension = force * arm * bolt_share(width) * self.yields
            lift = tension / self.yields
            bolt = next(
                (
                    s
                    for s in screws
                    if s.stress_area * s.yield_strength >= tension
                    and preload(s) >= lift
                    and 0.9 * f_ub * s.stress_area >= lift * self.ultimate
                ),
                cap_screws()[-1],
            )
            # holes a quarter from the edges and half the block apart, each with its web
            hole = max(dowel, bolt.clearance_hole)
            for_holes = 2.0 * hole + 4.0 * max(2.0, 0.25 * hole)
            sink = bolt.counterbore_diameter  # in the disc's back, half the block from the dowel
            for_holes = max(for_holes, sink + dowel + 2.0 * max(2.0, 0.25 * max(sink, dowel)))
            f_y = material.yield_strength(width)
            weaker = min(f_y, self.link_material.yield_strength(depth))
            length = max(
                6.0 * force * arm * self.yields / (f_y * width**2),
                force * self.yields / (weaker * depth),
                1.5 * force * math.sqrt(3.0) * self.yields / (f_y * width),
                2.0 * width * lift * self.ultimate / (f_y * height**2),
                for_holes,
                self.least("stop.length"),
            )  # fmt: skip
            length = round_up(length, self.step)
            block = StopSizes(
                "block", 0.0, length, width, height, dowel, bolt.thread, bolt.clearance_hole, 0.0, material
            )
            clear = self.clears_bore(block, link, bore)
            pried, _ = t_stub_capacity(length, width, height, f_y, bolt.stress_area, f_ub)
            strips, _ = stripping(block, material.ultimate_strength(width))
            keeps = strips >= max(preload(bolt) + lift, f_ub * bolt.stress_area)
            held = keeps and pried >= lift * self.ultimate * (1.0 - 1e-9)
            enough = width >= for_holes and clear
            if enough and held and length <= max(room, for_holes):
                break
            if enough and (spare is None or (held and not spare[0])):
                spare = held, width, length, dowel, bolt
        else:  # none is all of it: rather too long for the flank than as wide as the table goes
            if spare is not None:
                _, width, length, dowel, bolt = spare
        why = "least foot at which dowels, bolts and bending reach their targets"
        width = self.ledger.take("stop.width", wish.width, float(width), why)
        length = self.ledger.take("stop.length", wish.length, length, why)
        return StopSizes(
            "block", 0.0, length, width, height, dowel, bolt.thread, bolt.clearance_hole, bolt.tapping_hole, material
        )

    def dowel_bearing_use(self, stop: StopSizes, depth: float, material: Material) -> float:
        """Use of the bearing capacity of the dowels in a plate ``depth`` mm thick."""
        f_y = min(material.yield_strength(depth), stop.material.yield_strength(stop.width))
        bears = 2.0 * float(eyes.bearing(depth, stop.dowel_diameter, f_y))
        return float(np.max(self.loads.stop)) * self.yields / bears

    def clears_bore(self, stop: StopSizes, link: LinkSizes, bore: float) -> bool:
        holes = self.stop_holes(link, stop)
        return all(math.hypot(x, y) - (d + bore) / 2.0 >= max(2.0, 0.25 * max(d, bore)) for x, y, d in holes)

    def stop_holes(self, link: LinkSizes, stop: StopSizes) -> list[tuple[float, float, float]]:
        """x, y and diameter of the stop's holes in the disc of a ccw machine."""
        (x, y), direction = stop_center(self.design.mechanism, link.width, stop)
        if stop.style == "post":
            return [(x, y, stop.diameter)]
        c, s = math.cos(direction), math.sin(direction)
        return [(x + a * c - b * s, y + a * s + b * c, d) for a, b, d in block_hole_offsets(stop)]
