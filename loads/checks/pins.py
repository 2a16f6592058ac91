"""Pins: shear, bending and both, in double shear or held at one end."""

from __future__ import annotations

import math

import numpy as np

from loads.checks.context import BEAM, EN_PINS, Context, length_of, rule_note
from loads.records import Check
from parts.contact_lengths import chain_pin_in_link, crank_pin_in_link
from parts.design import Floats, Material
from parts.fits import covers, interference
from parts.hardening import is_case, section_words, state


def circle_area(d: Floats | float) -> Floats:
    """Area (mm²) of a circle of diameter ``d`` (mm)."""
    return np.asarray(math.pi * np.asarray(d) ** 2 / 4.0)


def section_modulus(d: Floats | float) -> Floats:
    """Elastic section modulus W_el (mm³) of a round section of diameter ``d`` (mm)."""
    return np.asarray(math.pi * np.asarray(d) ** 3 / 32.0)


def pin_shear_capacity(d: Floats | float, f_up: Floats | float) -> Floats:
    """F_v,R = 0.6 A f_up in N for one shear plane; d in mm, f_up in MPa.

    Source: EN 1993-1-8:2005 table 3.10, partial factor γM2 set to 1.
    """
    return np.asarray(0.6 * circle_area(d) * f_up)


def pin_bending_capacity(d: Floats | float, f_yp: Floats | float) -> Floats:
    """M_R = 1.5 W_el f_yp in N·mm of a pin in double shear; d in mm, f_yp in MPa.

    Source: EN 1993-1-8:2005 table 3.10, γM0 set to 1.
    """
    return np.asarray(1.5 * section_modulus(d) * f_yp)


def replaceable_pin_bending_capacity(d: Floats | float, f_yp: Floats | float) -> Floats:
    """M_R,ser = 0.8 W_el f_yp in N·mm of a pin that is to be taken out again; d in mm, f_yp in MPa.

    Source: EN 1993-1-8:2005 table 3.10, γM6,ser = 1.
    """
    return np.asarray(0.8 * section_modulus(d) * f_yp)


def double_shear_moment(force: Floats, outer: float, inner: float, gap: float) -> Floats:
    """M = F (b + 4c + 2a) / 8 in N·mm: inner plate b, gaps c, outer plates a, all in mm; F in N.

    Source: EN 1993-1-8:2005 figure 3.11.
    """
    return np.asarray(force * (inner + 4.0 * gap + 2.0 * outer) / 8.0)


def first_yield_bending_capacity(d: Floats | float, f_y: Floats | float) -> Floats:
    """W_el f_y in N·mm: the outermost fibre of a round section just yields. Source: beam theory."""
    return np.asarray(section_modulus(d) * f_y)


def shear_and_bending_factor(shear_use: Floats, bending_use: Floats) -> Floats:
    """1/sqrt of (M/M_R)² + (F/F_R)²: the factor by which all loads may grow until the interaction reaches 1.

    Source: EN 1993-1-8:2005 table 3.10, combined shear and bending of the pin.
    """
    use = np.hypot(shear_use, bending_use)
    return np.where(use > 0.0, 1.0 / np.maximum(use, 1e-300), np.inf)


def eye_contact_stress(force: Floats, modulus: float, d: float, d_0: Floats | float, t: float) -> Floats:
    """σ_h,Ed = 0.591 sqrt(E F (d_0 − d)/(d² t)) in MPa of a pin d in a hole d_0 ≥ d over t; N, mm, MPa.

    Source: EN 1993-1-8:2005 §3.13.2(3), equation 3.15.
    """
    gap = np.maximum(np.asarray(d_0, dtype=float) - d, 0.0)
    return np.asarray(0.591 * np.sqrt(modulus * np.asarray(force) * gap / (d**2 * t)))


def eye_contact_limit(f_y: float) -> float:
    """f_h,Rd = 2.5 f_y in MPa, γM6,ser = 1. Source: EN 1993-1-8:2005 §3.13.2(3), equation 3.16."""
    return 2.5 * f_y


def core_pressure_limit(f_y: float) -> float:
    """p0 = 1.67 f_y in MPa at which a line contact first yields below its surface (Tresca).

    Source: Johnson, Contact Mechanics, equation 6.4. Used for the core of a pin that fills its hole nearly: there the
    greatest shear lies deeper than any case, so the core has to bear the pressure by itself.
    """
    return 1.67 * f_y


def contact_checks(c: Context) -> list[Check]:
    """Contact stress of each pin that runs or lies with clearance, at the fit's largest clearance."""
    z = c.sizes
    crank, chain, link, end = z.crank_pin, z.chain_pin, z.link, z.chain_end
    journal = crank_pin_in_link(crank.diameter, link.thickness, link.counterbore_depth, c.stack.crank_pin_headed)
    whole, side = length_of(c.members.chain_on_pin), length_of(c.members.chain_side)
    rows = []
    for part, site, d, fit, t, force, pin, eye, size in (
        ("crank_pin", "journal", crank.diameter, z.fits.crank_pin_link, journal,
         length_of(c.members.pin_on_link), crank.material, link.material, link.thickness),
        ("chain_pin", "journal", chain.middle_diameter, z.fits.chain_end, end.width, whole, chain.material,
         end.material, end.width),
        ("chain_pin", "link_seat", chain.diameter, z.fits.chain_pin_link,
         chain_pin_in_link(chain.diameter, link.thickness), side, chain.material, link.material, link.thickness),
    ):  # fmt: skip
        play = -interference(fit, d)[0] if covers(d) else 0.0
        if play <= 0.0 or t <= 0.0:
            continue
        modulus = 2.0 / (1.0 / pin.youngs_modulus + 1.0 / eye.youngs_modulus)
        stress, words = eye_contact_stress(force, modulus, d, d + play, t), state(pin)
        how = f"0.591 sqrt(E F (d_0 − d)/(d² t)) ≤ 2.5 f_y, d_0 − d = {play:.3f} mm ({fit}), γ = 1"
        rows.append(
            c.worst_check(
                part, site, "contact in the eye", stress,
                eye_contact_limit(min(pin.surface_strength(d), eye.yield_strength(size))), "MPa", 1.0,
                how + (f", f_y the lower of plate and pin ({words})" if words else ""), EN_PINS, rule_note(eye),
            )
        )  # fmt: skip
        if is_case(pin):
            rows.append(
                c.worst_check(
                    part, site, "core under the case", stress, core_pressure_limit(pin.yield_strength(d)), "MPa", 1.0,
                    f"the same pressure against p0 = 1.67 f_y of the core, however deep the case lies; {words}",
                    "Johnson, Contact Mechanics, §6.1",
                )
            )  # fmt: skip
    return rows


def pin_checks(
    c: Context,
    part: str,
    site: str,
    d: float,
    material: Material,
    shear: Floats,
    moment: Floats,
    held: bool,
    what: str = "pin",
    holder: str = "at one end",
) -> list[Check]:
    """Shear, bending and both of one section of diameter ``d``; ``held`` at one end, else in double shear.

    ``what`` is the name of the part in the rows, ``holder`` says where a held one is held.
    """
    f_u, f_y = material.ultimate_strength(d), material.yield_strength(d)
    shear_capacity = float(pin_shear_capacity(d, f_u))
    if held:
        bending_capacity, bending_method = (
            float(first_yield_bending_capacity(d, f_y)),
            f"W_el f_y, {what} held {holder}",
        )
    else:
        bending_capacity, bending_method = float(pin_bending_capacity(d, f_y)), "1.5 W_el f_y, M = F(b + 4c + 2a)/8"
    hard = section_words(material)
    source = BEAM if held else EN_PINS
    targets = c.design.targets
    rows = [
        c.worst_check(
            part,
            site,
            f"{what} shear",
            shear,
            shear_capacity,
            "N",
            targets.ultimate,
            "0.6 A f_u, one shear plane" + hard,
            EN_PINS,
            rule_note(material),
        ),
        c.worst_check(
            part,
            site,
            f"{what} bending",
            moment,
            bending_capacity,
            "N·mm",
            targets.yield_,
            bending_method + hard,
            source,
            rule_note(material),
        ),
    ]
    if not held:
        rows.append(
            c.worst_check(
                part,
                site,
                f"{what} bending, replaceable",
                moment,
                float(replaceable_pin_bending_capacity(d, f_y)),
                "N·mm",
                1.0,
                "0.8 W_el f_y at the working load, γ = 1" + hard,
                EN_PINS,
                rule_note(material),
            )
        )
    factor = shear_and_bending_factor(shear / shear_capacity, moment / bending_capacity)
    both = np.where(np.isfinite(factor), 1.0 / factor, 0.0)
    rows.append(
        c.worst_check(
            part,
            site,
            f"{what} shear with bending",
            both,
            1.0,
            "1",
            targets.yield_,
            "(M/M_R)² + (F/F_R)² = 1, all loads growing together",
            EN_PINS,
            rule_note(material),
        )
    )
    return rows


def check(c: Context) -> list[Check]:
    """Crank pin at its root in the disc; chain pin at its middle and at its seat in the link; contact in the eyes."""
    return [*_sections(c), *contact_checks(c)]


def _sections(c: Context) -> list[Check]:
    crank, chain = c.sizes.crank_pin, c.sizes.chain_pin
    root = c.site("crank_pin", "root")
    # at the disc's face, not at the middle of the seat: half the disc nearer the load
    to_face = c.stack.pin_root_arm / (c.stack.disc_middle - c.stack.link_middle)
    journal = c.site("crank_pin", "journal")
    direct = root.moment + journal.moment
    moment = length_of(direct * to_face - journal.moment)
    rows = pin_checks(c, "crank_pin", "root", crank.diameter, crank.material, length_of(root.force), moment, True)
    if c.stack.chain_pin_support == "double shear":
        whole = length_of(c.members.chain_on_pin)
        inner = c.sizes.chain_end.width
        gap = (c.stack.chain_plane_width - inner) / 2.0
        moment = double_shear_moment(whole, c.stack.link_thickness, inner, gap)
        rows += pin_checks(
            c, "chain_pin", "middle", chain.middle_diameter, chain.material, whole * c.stack.load_share, moment, False
        )
        share = length_of(c.members.chain_side)
        rows += pin_checks(
            c,
            "chain_pin",
            "shoulder",
            chain.diameter,
            chain.material,
            share,
            share * c.stack.link_thickness / 2.0,
            True,
        )
    else:
        side = length_of(c.members.chain_side)
        arm = c.stack.chain_plane_width / 2.0
        rows += pin_checks(
            c,
            "chain_pin",
            "link_seat",
            min(chain.diameter, chain.collar_diameter),
            chain.material,
            side,
            side * arm,
            True,
        )
        rows += pin_checks(
            c,
            "chain_pin",
            "collar",
            chain.middle_diameter,
            chain.material,
            side,
            side * c.sizes.chain_end.width / 2.0,
            True,
        )
    return rows
