"""What all proportions share: the loads to size for, the ledger of what was assumed, preferred sizes."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from loads.checks import eyes, pins, press
from loads.members import History
from loads.practice import press_fits
from parts.catalogue import Catalogue
from parts.design import Assumed, Design, Floats, LinkWish, Material, PinWish, StopWish
from parts.fits import covers
from parts.hardening import hardened
from parts.hardware import preferred
from parts.stack import Stack, make_stack

PLATE, BAR = "S690QL", "42CrMo4+QT"  # grades that parts are made of where the design names none
LEAST_LINK = 25.0  # link length over least thickness: a plate that is not bent in handling; common practice, no source
LEAST_BORE = 0.2  # of the crank radius; common practice, no source
SPIGOT = 0.6  # of the shaft's diameter: the bore locates, the bolts carry; common practice, no source
LEAST_BOLT = 0.2  # of the bore; common practice, no source
LEAST_PIN = 20.0  # link length over least pin diameter; common practice, no source
LOOK_AT = 5  # plates of which the link's width is worked out
EDGE = 0.9  # of the crank pin: least material between its hole and the rim; common practice, no source
RINGS = np.linspace(0.02, 0.97, 20)  # pin over ring, whatever edge distance the plate comes to have
LEAST_WIDTH = 10.0  # link length over least width; common practice, no source


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


def demands(past: History, share: float, shock: Floats) -> Demands:
    s = past.state
    c, sn = np.cos(s.link_direction), np.sin(s.link_direction)

    def in_link(x: Floats, y: Floats) -> Floats:
        return np.stack([x * c + y * sn, -x * sn + y * c, np.zeros_like(x)]) * shock * share

    return Demands(
        in_link(-s.shaft_x, -s.shaft_y), in_link(s.pin_x, s.pin_y), s.stop_force * shock * share,
        s.tension * shock * share, s.tension * shock, s.torque * shock * share,
    )  # fmt: skip


def first(candidates: Floats, use: Floats) -> float:
    """The first candidate whose use of its capacity is at most 1; the least used if there is none."""
    return float(candidates[index(use)])


def index(use: Floats) -> int:
    good = np.flatnonzero(use <= 1.0)
    return int(good[0] if good.size else np.argmin(use))


def round_up(value: float, step: float) -> float:
    return math.ceil(value / step - 1e-9) * step


@dataclass(frozen=True, slots=True)
class Pair:
    """Thickness of the link with the pins that go with it."""

    thickness: float
    crank: float
    chain: float
    middle: float
    width: float  # of the link, 0 before it is known
    use: float  # the largest share of a capacity that is used; above 1 no preferred size is enough

    @property
    def rank(self) -> tuple[float, float]:
        """What is enough comes first, then what is smallest."""
        across = self.width if self.width > 0.0 else max(self.crank, self.chain) ** 2
        return max(self.use, 1.0), across * self.thickness


def sink_depth(d: Floats) -> Floats:
    """Depth (mm) of the sink for the crank pin's head: a quarter of the pin and room below the face."""
    return np.asarray(np.maximum(2.0, np.round(0.22 * d * 2.0) / 2.0) + 0.3)


def next_up(sizes: Floats, wanted: float) -> float:
    above = sizes[sizes >= wanted - 1e-9]
    return float(above[0]) if above.size else wanted


class Basis:
    """One design with the loads and sizes that its proportions come from.

    ``floors``: least sizes (mm) by key of the design file, of what it leaves open.
    """

    def __init__(
        self, design: Design, past: History, catalogue: Catalogue, floors: Mapping[str, float] | None = None
    ) -> None:
        self.design, self.past, self.catalogue = design, past, catalogue
        self.floors = floors or {}
        self.ledger = Ledger()
        self.step = 25.4 / 16.0 if design.identity.units == "us" else 1.0
        take, z = self.ledger.material, catalogue
        self.disc_material = take("disc.material", design.disc.material, PLATE, z)
        self.link_material = self._hardened("link", design.link, PLATE, whole=False)
        self.crank_material = self._hardened("crank_pin", design.crank_pin, BAR)
        self.chain_pin_material = self._hardened("chain_pin", design.chain_pin, BAR)
        self.stop_material = self._hardened("stop", design.stop, BAR)
        # a block has dowels and tapped holes, which its hardened face does nothing for
        grade = design.stop.material or catalogue.materials[BAR]
        self.block_material = hardened(grade, design.stop.surface_yield, design.stop.case_depth, whole=False)
        far = design.far_end
        self.end_material = take(
            f"{far.part}.material", design.chain_end.material, PLATE if far.length_of_plate else BAR, z
        )
        gap = 0.5 if design.mechanism.link_length < 60.0 else 1.0
        self.gap = self.ledger.take(
            "clearances.plate_gap", design.plate_gap, gap, "running gap of such plates; common practice, no source"
        )
        t = design.targets
        self.ultimate, self.yields = t.ultimate, t.yield_
        listed = np.array(preferred("pin_diameters", design.identity.units))
        self.pins = listed[listed >= min(design.mechanism.link_length / LEAST_PIN, listed[-1])]
        self.plates = np.array(preferred("plate_thicknesses", design.identity.units))

        self.least_width = 0.0  # of the link, for what stands beside it
        kind = self.stack(1.0, 1.0, 1.0)
        self.headed = kind.crank_pin_headed
        self.loads = demands(past, kind.load_share, past.over(t.shock_factor))

    def _hardened(self, part: str, wish: LinkWish | PinWish | StopWish, grade: str, whole: bool = True) -> Material:
        """A part's material, as the design hardens it; of a link the flank alone is hardened."""
        material = self.ledger.material(f"{part}.material", wish.material, grade, self.catalogue)
        return hardened(material, wish.surface_yield, wish.case_depth, whole)

    def stack(self, end_width: float, link: float, disc: float) -> Stack:
        d = self.design
        return make_stack(d.mechanism.stack, d.targets.load_share, d.far_end, end_width, self.gap, link, disc)

    def least(self, key: str) -> float:
        """The floor under a size (mm); 0 where there is none."""
        return self.floors.get(key, 0.0)

    def from_floor(self, sizes: Floats, key: str) -> Floats:
        """The sizes (mm) from the key's floor on; the largest of them where it is above them all."""
        above = sizes[sizes >= self.least(key) - 1e-9]
        return above if above.size else sizes[-1:]

    def within(self, sizes: Floats, material: Material) -> Floats:
        """The sizes (mm) that the material's table covers; the smallest of them where it covers none."""
        inside = sizes[[material.covers(float(x)) for x in sizes]]
        return inside if inside.size else sizes[:1]

    def pin_use(self, d: Floats, material: Material, shear: float, moment: float) -> Floats:
        """Largest use of a pin held at one end, over diameters."""
        f_u = np.array([material.ultimate_strength(float(x)) for x in d])
        f_y = np.array([material.yield_strength(float(x)) for x in d])
        v = shear / pins.pin_shear_capacity(d, f_u)
        m = moment / pins.first_yield_bending_capacity(d, f_y)
        both = 1.0 / pins.shear_and_bending_factor(v, m)
        return np.maximum(np.maximum(v * self.ultimate, m * self.yields), both * self.yields)

    def double_shear_use(self, d: Floats, material: Material, shear: float, moment: float) -> Floats:
        """Largest use of a pin in double shear that is to be taken out again, over diameters."""
        f_u = np.array([material.ultimate_strength(float(x)) for x in d])
        f_y = np.array([material.yield_strength(float(x)) for x in d])
        v = shear / pins.pin_shear_capacity(d, f_u)
        m = moment / pins.pin_bending_capacity(d, f_y)
        both = 1.0 / pins.shear_and_bending_factor(v, m)
        later = moment / pins.replaceable_pin_bending_capacity(d, f_y)
        return np.asarray(np.max([v * self.ultimate, m * self.yields, both * self.yields, later], axis=0))

    def bearing_use(
        self,
        d: Floats,
        t: Floats | float,
        force: Floats | float,
        pin: Material,
        plate: Material,
        at: float,
        turns: bool,
    ) -> Floats:
        """Share of the bearing capacity that is used, over pin diameters; ``at`` is the thickness that strength goes by."""
        f_y = np.array([min(pin.yield_strength(float(x)), plate.yield_strength(at)) for x in d])
        capacity = np.min([rule.capacity for rule in eyes.bearing_rules(t, d, f_y, turns)], axis=0)
        return np.asarray(force * self.yields / np.maximum(capacity, 1e-9))

    def _press_fit(self, d: float, outer: Material, inner: Material) -> str:
        """The first press fit that stays elastic in a ring of any width, else the loosest."""
        fits = press_fits()
        if not covers(d):
            return fits[0]
        for fit in fits:
            ring, pin = press.fit_stresses(fit, d, d / RINGS, outer, inner)
            if np.max(ring) <= outer.yield_strength(d) and np.max(pin) <= inner.yield_strength(d):
                return fit
        return fits[-1]
