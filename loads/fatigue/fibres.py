"""Which fibres are looked at, and their stress over one shot: plates at eyes and stop, pins all round.

Stresses are local: concentration, notch sensitivity and the load factor of axial stress are in them.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from loads.checks.concentration import PETERSON
from loads.checks.context import BEAM, COMMON, Context
from loads.checks.link import rectangle_torsion_stress
from loads.checks.pins import double_shear_moment, section_modulus
from loads.checks.shaft import torque_of
from loads.fatigue.data import keyseat, press_fit
from loads.fatigue.notches import edge_stress, outward_concentration, step_concentration
from loads.fatigue.strength import AXIAL, notch_factor, rectangle_diameter, size_factor, torsion_notch_factor
from parts.design import Floats, Material
from parts.shape import edge_distance
from parts.sizes import ShaftSizes

ROUND = np.radians(np.arange(0.0, 360.0, 15.0))
SHIGLEY = "Shigley, 9th edition, chapter 6"
HOLE = "stress along the hole's edge by finite elements of this project, no published source"
FRETTING = "fretting between pin and hole, and the stress of a fit, are not in it"
MESH = "without the drive's own mesh force"
TILT = "; a stub pin's tilt presses the hole straight-line through its depth, which is on the safe side for a tight pin"


@dataclass(frozen=True, slots=True)
class Site:
    """Fibres of one feature over one shot: ``stress`` (fibres, angles) in MPa, with what their strength goes by."""

    part: str
    site: str
    stress: Floats
    material: Material
    size: float  # mm, which the material's strength goes by
    surface: str  # plates, holes or pins
    k_b: float
    how: str
    source: str
    note: str = ""


def sites(c: Context) -> Iterator[Site]:
    """Every feature whose fibres are looked at, in the order of the parts."""
    yield _stop_section(c)
    yield from _eyes(c)
    yield from _pins(c)
    yield from _stop(c)
    if c.sizes.running is not None:
        yield _main_shaft(c, c.sizes.running.shaft)
        if c.sizes.running.shaft.drive == "key":
            yield _keyseat(c, c.sizes.running.shaft)


def _stop_section(c: Context) -> Site:
    """The four corners of the link's section at the stop, on the chain pin's side where the moment is greatest."""
    link, m = c.sizes.link, c.design.mechanism
    w, t = link.width, link.thickness
    pull = c.site("swing_link", "chain_pin_eye")
    axial = pull.force[0] / (w * t) / AXIAL
    in_plane = 6.0 * pull.force[1] * (m.link_length - m.stop_reach) / (t * w**2)
    across = 6.0 * pull.moment[1] / (w * t**2)
    corners = [axial + a * in_plane + b * across for a in (1.0, -1.0) for b in (1.0, -1.0)]
    if np.any(pull.moment[0]):
        twist = math.sqrt(3.0) * rectangle_torsion_stress(pull.moment[0], max(w, t), min(w, t))
        corners = [corner + side * twist for corner in corners for side in (1.0, -1.0)]
    return Site(
        "swing_link", "stop_flank", np.stack(corners), link.material, t, "plates",
        float(size_factor(rectangle_diameter(w, t))), "both flanks and both faces, N/A/0.85 + M/W", f"{SHIGLEY}; {BEAM}",
        "the pressure and rubbing of the stop on the flank are not in it",
    )  # fmt: skip


def _faces(force: Floats, moment: Floats, thickness: float) -> list[Floats]:
    """The force (2, n) that the hole feels at its two faces: the pin's tilt presses one of them more than the other.

    A moment across the plate is a pressure that grows straight through the thickness, ± 6 M/t². Beam theory.
    """
    tilt = 6.0 / thickness * np.stack([moment[1], -moment[0]])
    flat = force[:2]
    return [flat + tilt, flat - tilt] if np.any(moment[:2]) else [flat]


def _eye(
    c: Context, part: str, hole: str, force: Floats, moment: Floats, thickness: float, material: Material, size: float,
    outward: float,
) -> Site:  # fmt: skip
    plate = c.plate(part)
    found = next(h for h in plate.holes if h.name == hole)
    d = found.diameter
    kind = "edge" if part == "crank_disc" else "eye"
    directions = outward + np.radians([0.0, 90.0, -90.0])
    edge = edge_distance(plate, found.center, directions, holes=True, skip=(hole,))
    width = float(np.clip(2.0 * np.min(edge), 1.02 * d, 50.0 * d))
    s_ut = material.ultimate_strength(size)
    k_t = outward_concentration(kind, d, width)
    k_f = float(notch_factor(k_t, d / 2.0, s_ut))
    faces = _faces(force, moment, thickness)
    both = edge_stress(kind, np.hstack(faces), ROUND, outward, d, width, thickness)
    stress = np.vstack(np.split(both, len(faces), axis=1))
    return Site(
        part, hole, stress * (k_f / k_t / AXIAL), material, size, "holes", 1.0,
        f"hole's edge all round, {kind} {width:.3g} mm wide, K_t {k_t:.3g}, K_f {k_f:.3g}, k_c {AXIAL}",
        f"{SHIGLEY}; {HOLE}", FRETTING + (TILT if np.any(moment[:2]) else ""),
    )  # fmt: skip


def _eyes(c: Context) -> Iterator[Site]:
    z = c.sizes
    link, disc, end = z.link, z.disc, z.chain_end
    crank, chain = c.site("swing_link", "crank_pin_eye"), c.site("swing_link", "chain_pin_eye")
    in_sink = link.thickness - link.counterbore_depth
    yield _eye(
        c, "swing_link", "crank_pin_eye", crank.force, crank.moment, in_sink, link.material, link.thickness, math.pi
    )
    yield _eye(
        c, "swing_link", "chain_pin_eye", chain.force, chain.moment, link.thickness, link.material, link.thickness, 0.0
    )
    hole = c.site("crank_disc", "crank_pin_hole")
    yield _eye(
        c, "crank_disc", "crank_pin_hole", hole.force, hole.moment, disc.thickness, disc.material, disc.thickness, 0.0
    )
    if z.stop.style == "post":
        seat = c.site("crank_disc", "stop_seat")
        center = next(h for h in c.plate("crank_disc").holes if h.name == "stop_seat").center
        yield _eye(
            c, "crank_disc", "stop_seat", seat.force, seat.moment, disc.thickness, disc.material, disc.thickness,
            math.atan2(center[1], center[0]),
        )  # fmt: skip
    far = c.design.far_end
    pull = np.linalg.norm(c.members.chain_on_pin, axis=0)
    along = np.stack([pull, np.zeros_like(pull), np.zeros_like(pull)])
    meat = max(end.width - 2.0 * sum(b - a for a, b in end.slots), 1e-3)
    yield _eye(c, far.part, "chain_pin_eye", -along, 0.0 * along, end.width, end.material, end.width, math.pi)
    yield _eye(c, far.part, far.far_hole, along, 0.0 * along, meat, end.material, end.width, 0.0)


def _pin(
    part: str, site: str, moment: Floats, d: float, k_t: float, k_f: float, material: Material, how: str, source: str
) -> Site:
    """Fibres all round a round section under a moment (3, n) that turns."""
    stress = k_f * (np.sin(ROUND)[:, None] * moment[0] - np.cos(ROUND)[:, None] * moment[1]) / float(section_modulus(d))
    shown = f"fibres all round, M/W of {d:.3g} mm, {how}K_f {k_f:.3g}"
    return Site(part, site, stress, material, d, "pins", float(size_factor(d)), shown, f"{SHIGLEY}; {source}")


def _pressed(part: str, site: str, moment: Floats, d: float, material: Material) -> Site:
    """A section at the edge of the hole that a pin is pressed into."""
    fit = press_fit()
    k_f = fit.k_f(material.ultimate_strength(d))
    return _pin(part, site, moment, d, k_f, k_f, material, "press fit with fretting, ", fit.source)


def _notched(c: Context, part: str, site: str, moment: Floats, small: float, large: float, m: Material) -> Site:
    wish = c.design.fatigue
    assert wish is not None
    r = min(wish.fillet_radius, max((large - small) / 2.0, 1e-3))
    k_t = step_concentration(large, small, r)
    k_f = float(notch_factor(k_t, r, m.ultimate_strength(small)))
    return _pin(
        part,
        site,
        moment,
        small,
        k_t,
        k_f,
        m,
        f"fillet {r:.3g} mm, K_t {k_t:.3g}, ",
        PETERSON,
    )


def _cross(force: Floats, arm: float) -> Floats:
    """Moment (3, n) at a section of a force (3, n) that acts ``arm`` mm from it along the pin."""
    return np.stack([-arm * force[1], arm * force[0], np.zeros_like(force[0])])


def _pins(c: Context) -> Iterator[Site]:
    crank, chain = c.sizes.crank_pin, c.sizes.chain_pin
    root, journal = c.site("crank_pin", "root"), c.site("crank_pin", "journal")
    to_face = c.stack.pin_root_arm / (c.stack.disc_middle - c.stack.link_middle)
    at_face = (root.moment + journal.moment) * to_face - journal.moment
    yield _pressed("crank_pin", "root", at_face, crank.diameter, crank.material)
    on_pin = c.site("chain_pin", "journal").force
    if c.stack.chain_pin_support == "double shear":
        inner = c.sizes.chain_end.width
        gap = (c.stack.chain_plane_width - inner) / 2.0
        arm = float(double_shear_moment(np.array([1.0]), c.stack.link_thickness, inner, gap)[0])
        yield _pin(
            "chain_pin", "middle", _cross(on_pin, arm), chain.middle_diameter, 1.0, 1.0, chain.material, "", BEAM
        )
        side = on_pin * c.stack.load_share
        arm = c.stack.link_thickness / 2.0
        yield _notched(
            c,
            "chain_pin",
            "shoulder",
            _cross(side, arm),
            *_smaller(chain.diameter, chain.middle_diameter),
            chain.material,
        )
        return
    seat = min(chain.diameter, chain.collar_diameter)
    yield _pressed("chain_pin", "link_seat", _cross(on_pin, c.stack.chain_plane_width / 2.0), seat, chain.material)
    yield _notched(
        c, "chain_pin", "collar", _cross(on_pin, c.sizes.chain_end.width / 2.0),
        *_smaller(chain.middle_diameter, chain.collar_diameter), chain.material,
    )  # fmt: skip


def _smaller(one: float, other: float) -> tuple[float, float]:
    return min(one, other), max(one, other)


def _stop(c: Context) -> Iterator[Site]:
    stop = c.sizes.stop
    push = c.site("stop", "contact").force
    if stop.style == "post":
        moment = _cross(push, c.stack.pin_root_arm)
        yield _pressed("stop", "root", moment, stop.diameter, stop.material)
        return
    size = np.linalg.norm(push, axis=0)
    stress = 6.0 * size * c.stack.pin_root_arm / (stop.length * stop.width**2)
    yield Site(
        "stop", "root", np.stack([stress, -stress]), stop.material, stop.width, "pins",
        float(size_factor(rectangle_diameter(stop.length, stop.width))), "both edges of the block's foot, M/W",
        f"{SHIGLEY}; {BEAM}", "the holes in it and the rubbing of its foot are not in it",
    )  # fmt: skip


def _shaft_fibres(c: Context, arm: float, d: float, k_f: float, k_fs: float) -> Floats:
    """Fibres all round the shaft ``arm`` mm behind the disc's back, in the disc's frame, which turns with it.

    √3 τ is added to the bending stress of each fibre, once with either sign: no less than the distortion energy of
    both, whatever their phase. The torque turns round past the null, where the spring drives.
    """
    hub, w = c.site("crank_disc", "hub_face"), float(section_modulus(d))
    gx, gy = hub.moment[1] + arm * hub.force[0], -hub.moment[0] + arm * hub.force[1]
    bending = k_f / w * (np.cos(ROUND)[:, None] * gx + np.sin(ROUND)[:, None] * gy)
    torque = np.copysign(torque_of(c)[0], c.members.torque_side)
    twist = k_fs / w * math.sqrt(3.0) / 2.0 * torque
    return np.vstack([bending + twist, bending - twist])


def _main_shaft(c: Context, shaft: ShaftSizes) -> Site:
    """The shaft at its first bearing: at the edge of a rolling bearing's ring as of a press fit.

    In a plain bush, which presses on nothing, the least of that factor stands for edge pressure and shoulder.
    """
    d, fit = shaft.diameter, press_fit()
    rolling = c.running.main_bearing.kind == "rolling"
    k_f = fit.k_f(shaft.material.ultimate_strength(d)) if rolling else fit.least
    seat = "press fit" if rolling else f"bush and shoulder, {COMMON}"
    return Site(
        "main_shaft", "first_bearing", _shaft_fibres(c, shaft.overhang, d, k_f, k_f), shaft.material, d,
        "pins", float(size_factor(d)), f"fibres all round, M/W ± √3 T/(2 W) of {d:.3g} mm, {seat}, K_f {k_f:.3g}",
        f"{SHIGLEY}; {fit.source if rolling else BEAM}", MESH,
    )  # fmt: skip


def _keyseat(c: Context, shaft: ShaftSizes) -> Site:
    """The shaft at the inner end of the hub's key, wherever round the shaft that is.

    A keyed hub frets as a pressed one does: in bending the larger of both factors.
    """
    d, fit, seat = shaft.diameter, press_fit(), keyseat()
    s_ut, r = shaft.material.ultimate_strength(d), seat.r_over_d * d
    k_f = max(float(notch_factor(seat.k_t, r, s_ut)), fit.k_f(s_ut))
    k_fs = float(torsion_notch_factor(seat.k_ts, r, s_ut))
    arm = min(shaft.key_length, shaft.overhang)
    return Site(
        "main_shaft", "key", _shaft_fibres(c, arm, d, k_f, k_fs), shaft.material, d, "pins", float(size_factor(d)),
        f"fibres all round {arm:.3g} mm behind the disc, K_f M/W ± K_fs √3 T/(2 W) of {d:.3g} mm, end-milled keyseat, "
        f"K_t {seat.k_t:g}, K_ts {seat.k_ts:g}, r {r:.3g} mm, hub's edge; K_f {k_f:.3g}, K_fs {k_fs:.3g}",
        f"{SHIGLEY}; {seat.source}; {fit.source}", MESH,
    )  # fmt: skip
