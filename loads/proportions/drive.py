"""Proportions of what the parts run on, and the fits of their joints: main shaft, bearings, sheave pin."""

from __future__ import annotations

import math

import numpy as np

from loads.checks import pins, shaft
from loads.checks.bearings import bush_pressure
from loads.practice import key_for, value, values
from loads.proportions.basis import BAR, SPIGOT, index, next_up, round_up
from loads.proportions.discs import DiscSide
from parts.design import Assumed, BearingWish, Floats, Material
from parts.sizes import (
    BearingSizes,
    ChainPinSizes,
    CrankPinSizes,
    DiscSizes,
    FitSizes,
    LinkSizes,
    Running,
    ShaftSizes,
    SheavePinSizes,
    StopSizes,
)
from parts.stack import Stack


class DriveSide(DiscSide):
    """Shaft, bearings, sheave pin and fits, once everything else is known."""

    def _fits(self, crank: float, chain: float, stop: StopSizes, stack: Stack) -> FitSizes:
        wish = self.design.fits
        tight = "the tightest of the press fits that stays within yield at its largest interference"
        running = "runs under load: room for grease, little play"
        if stack.chain_pin_support == "cantilever":
            held = self._press_fit(chain, self.link_material, self.chain_pin_material), tight
        else:
            held = "H7/h6", "lies close between its shoulders and can be taken out"
        post = (
            self._press_fit(stop.diameter, self.disc_material, self.stop_material) if stop.style == "post" else "H7/r6"
        )
        disc = self._press_fit(crank, self.disc_material, self.crank_material)
        return FitSizes(
            crank_pin_disc=self._fit("crank_pin_disc", wish.crank_pin_disc, disc, tight),
            crank_pin_link=self._fit("crank_pin_link", wish.crank_pin_link, "H8/f7", running),
            chain_pin_link=self._fit("chain_pin_link", wish.chain_pin_link, *held),
            chain_end=self._fit("chain_end", wish.chain_end, "H8/f7", running),
            stop_disc=self._fit("stop_disc", wish.stop_disc, post, tight) if stop.style == "post" else post,
            dowel=(
                self._fit("dowel", wish.dowel, "H7/m6", "parallel pins are made to m6")
                if stop.style == "block"
                else wish.dowel or "H7/m6"
            ),
        )

    def _fit(self, key: str, given: str | None, usual: str, why: str) -> str:
        if given is None:
            self.ledger.rows.append(Assumed(f"fits.{key}", usual, "text", why))
        return given or usual

    def _running(
        self, disc: DiscSizes, link: LinkSizes, crank: CrankPinSizes, chain: ChainPinSizes, fits: FitSizes, stack: Stack
    ) -> Running:
        main = self._shaft(disc, link, crank, chain, fits, stack)
        a, b = main.overhang, main.bearing_spacing
        force = self.loads.tension
        first = float(np.max(force * (1.0 + self._arm(stack, a) / b)))
        bearing = self._bearing("bearings.main", self.design.main_bearing, first, main.diameter, None)
        if self.design.sheave is None:
            return Running(main, bearing, None, None)
        pin = self._sheave_pin()
        load = float(np.max(self._sheave_force()))
        sheave = self._bearing("bearings.sheave", self.design.sheave_bearing, load, pin.diameter, pin.hub)
        return Running(main, bearing, sheave, pin)

    def _arm(self, stack: Stack, overhang: float) -> float:
        """From the first bearing to where the chain pulls one side (mm)."""
        return stack.disc_back - stack.link_middle + stack.chain_offset + overhang

    def _shaft(
        self, disc: DiscSizes, link: LinkSizes, crank: CrankPinSizes, chain: ChainPinSizes, fits: FitSizes, stack: Stack
    ) -> ShaftSizes:
        wish, take = self.design.shaft, self.ledger.take
        material = self.ledger.material("shaft.material", wish.material, BAR, self.catalogue)
        phase, torque = self._phase(link, crank, chain, fits, stack)
        drive = wish.drive
        if drive is None:
            drive = "flange"
            self.ledger.rows.append(
                Assumed("shaft.drive", drive, "text", "one piece with the flange that the disc is bolted to")
            )
        d = self.within(self.pins[self.pins >= min(disc.bore / SPIGOT - 1e-6, self.pins[-1])], material)
        d = self.from_floor(d, "shaft.diameter")
        if wish.diameter is not None:
            d = np.array([wish.diameter])
        uses = np.array([self._shaft_use(float(x), material, drive, torque, disc, stack) for x in d])
        diameter = take(
            "shaft.diameter", wish.diameter, max(float(d[index(uses)]), next_up(self.pins, disc.bore / SPIGOT)),
            "smallest at which bending with torsion, lean of the disc, key and bushes reach their targets",
        )  # fmt: skip
        overhang, spacing, key_length = self._shaft_lengths(diameter)
        take("shaft.overhang", wish.overhang, overhang, "about one diameter; common practice, no source")
        take(
            "shaft.bearing_spacing", wish.bearing_spacing, spacing, "about three diameters; common practice, no source"
        )
        key = key_for(diameter)
        if drive == "key":
            take("shaft.key_length", wish.key_length, key_length, "1.25 diameters; common practice, no source")
        if len(stack.sides) > 1:
            take(
                "shaft.phase_tolerance", wish.phase_tolerance, phase,
                "most by which two discs may stand apart before one side pulls more than its load share", "angle",
            )  # fmt: skip
        keyed = drive == "key"
        return ShaftSizes(
            diameter, overhang, spacing, drive, key.width if keyed else 0.0, key.height if keyed else 0.0,
            key.seat if keyed else 0.0, key_length if keyed else 0.0, phase, material,
        )  # fmt: skip

    def _shaft_lengths(self, d: float) -> tuple[float, float, float]:
        """Overhang, bearing spacing and key length of a shaft ``d`` thick."""
        wish = self.design.shaft
        overhang = wish.overhang if wish.overhang is not None else round_up(value("shaft", "overhang") * d, self.step)
        spacing = wish.bearing_spacing
        if spacing is None:
            spacing = round_up(max(value("shaft", "bearing_spacing") * d, overhang), self.step)
        length = wish.key_length
        return (
            overhang,
            spacing,
            length if length is not None else round_up(value("shaft", "key_length") * d, self.step),
        )

    def _shaft_use(
        self, d: float, material: Material, drive: str, torque: Floats, disc: DiscSizes, stack: Stack
    ) -> float:
        overhang, spacing, key_length = self._shaft_lengths(d)
        force, f_y, modulus = self.loads.tension, material.yield_strength(d), material.youngs_modulus
        tilt = force * self._arm(stack, 0.0)
        stress = shaft.shaft_stress(tilt + overhang * force, torque, d)
        play = value("shaft", "play") * self.gap
        leaning = shaft.lean(force, tilt, d, overhang, spacing, modulus) * disc.outer_diameter / 2.0
        sagging = shaft.sag(force, tilt, d, overhang, spacing, modulus)
        uses = [
            float(np.max(stress)) * self.yields / f_y,
            float(np.max(leaning)) / max(play, 1e-9),
            float(np.max(sagging)) / max(play, 1e-9),
        ]
        if drive == "key":
            key, own = key_for(d), value("key", "yield")
            shear = shaft.key_shear_stress(torque, d, key.width, key_length)
            side = shaft.key_pressure(torque, d, key.height - key.seat, key_length)
            uses.append(float(np.max(shear)) * math.sqrt(3.0) * self.yields / own)
            uses.append(float(np.max(side)) * self.yields / min(own, f_y))
        bush = self.design.main_bearing
        if bush.kind != "rolling" and bush.static_rating is None:
            bore = bush.diameter or d
            width = bush.width or values("plain", "widths")[-1] * bore
            first = force * (1.0 + self._arm(stack, overhang) / spacing)
            uses.append(float(np.max(bush_pressure(first, bore, width))) / value("plain", "pressure"))
        return max(uses)

    def _phase(
        self, link: LinkSizes, crank: CrankPinSizes, chain: ChainPinSizes, fits: FitSizes, stack: Stack
    ) -> tuple[float, Floats]:
        """Phase tolerance of two discs (rad), and the torque of one shaft (N·mm, n) with it."""
        shared = np.abs(self.loads.torque)
        if len(stack.sides) < 2:
            return 0.0, shared
        m, whole = self.design.mechanism, self.loads.whole
        pair = shaft.pairing(
            link, m.link_length, chain.middle_diameter, chain.material, 2.0 * stack.link_middle, crank.diameter,
            fits.crank_pin_link, link.thickness,
        )  # fmt: skip
        both = shared / stack.load_share
        arm = shaft.phase_arm(self.past.state, whole, m)
        given = self.design.shaft.phase_tolerance
        if given is None:
            spare = np.maximum(stack.load_share * float(np.max(whole)) - whole / 2.0, 0.0)
            most = (spare / pair.stiffness + pair.play) / np.maximum(arm, 1e-9)
            step = math.radians(value("shaft", "phase_step"))
            limit = math.radians(value("shaft", "phase_tolerance"))
            given = min(math.floor(float(np.min(most)) / step) * step, limit)
        extra = shaft.phase_force(pair.stiffness, arm, given, pair.play)
        return given, np.maximum(shared, both / 2.0 + extra * arm)

    def _bearing(self, key: str, wish: BearingWish, force: float, bore: float, room: float | None) -> BearingSizes:
        """A bearing for a radial force; ``room`` is the width that a bush fills where that is settled."""
        take = self.ledger.take
        kind = wish.kind
        if kind is None:
            kind = "plain" if wish.static_rating is None else "rolling"
            why = "a bush, as the friction assumed is a bush's" if kind == "plain" else "a static rating is given"
            self.ledger.rows.append(Assumed(f"{key}.kind", kind, "text", why))
        if kind == "rolling":
            factor = value("rolling", "static_factor")
            rating = take(
                f"{key}.static_rating", wish.static_rating, round_up(factor * force, 100.0),
                f"least rating C0 to be bought: {factor:g} times the largest load", "force",
            )  # fmt: skip
            return BearingSizes("rolling", rating, 0.0, 0.0)
        d = take(f"{key}.diameter", wish.diameter, bore, "runs on its shaft or pin")
        least = force / (d * value("plain", "pressure"))
        steps = [x * d for x in values("plain", "widths")]
        natural = room if room is not None else next((x for x in steps if x >= least - 1e-9), steps[-1])
        why = "as wide as the sheave" if room is not None else "least width at which the pressure is within its limit"
        return BearingSizes("plain", 0.0, d, take(f"{key}.width", wish.width, natural, why))

    def _sheave_force(self) -> Floats:
        """Force (N, n) of both legs of the chain on the sheave."""
        s = self.past.state
        return np.asarray(np.hypot(s.sheave_x, s.sheave_y)) * self.past.over(self.design.targets.shock_factor)

    def _sheave_pin(self) -> SheavePinSizes:
        wish, take = self.design.sheave_pin, self.ledger.take
        far = self.design.far_end
        material = self.ledger.material("sheave.pin_material", wish.material, BAR, self.catalogue)
        hub = round_up(value("sheave", "flange") * far.plane_width, 1.0)
        gap = value("sheave", "gap")
        cheek = take(
            "sheave.cheek", wish.cheek, max(round_up(value("sheave", "cheek") * hub, 1.0), 4.0),
            "three tenths of the sheave's width; common practice, no source",
        )  # fmt: skip
        force = float(np.max(self._sheave_force()))
        d = self.within(self.pins, material)
        if wish.diameter is not None:
            d = np.array([wish.diameter])
        moment = float(pins.double_shear_moment(np.asarray(force), cheek, hub, gap))
        use = self.double_shear_use(d, material, force / 2.0, moment)
        bush = self.design.sheave_bearing
        if bush.kind != "rolling" and bush.static_rating is None:
            pressure = bush_pressure(np.asarray(force), 1.0, 1.0) / (d * (bush.width or hub))
            use = np.maximum(use, pressure / value("plain", "pressure"))
        diameter = take(
            "sheave.pin_diameter", wish.diameter, float(d[index(use)]),
            "smallest at which shear, bending and the bush's pressure reach their targets",
        )  # fmt: skip
        return SheavePinSizes(diameter, cheek, hub, gap, material)
