"""Rope, webbing and tie as far ends: their strengths by hand, their weak variants, what is refused."""

from __future__ import annotations

import math
from pathlib import Path

import numpy as np
import pytest

from loads.checks.pins import pin_shear_capacity
from loads.examine import Examination, examine
from loads.far_ends.registry import BEHAVIOURS
from loads.records import Check
from parts.far_ends.registry import KINDS
from parts.problems import DesignRefused
from tests.loads.far_end_designs import DESIGNS


def examined(folder: Path, text: str) -> Examination:
    file = folder / "design.toml"
    file.write_text(text, encoding="utf-8")
    return examine(file)


def row(e: Examination, part: str, check: str) -> Check:
    return next(c for c in e.checks if (c.part, c.check) == (part, check))


def test_every_kind_that_can_be_read_can_be_reckoned() -> None:
    assert KINDS.keys() == BEHAVIOURS.keys()


@pytest.mark.parametrize("name", DESIGNS)
def test_proportions_reach_every_target(name: str, tmp_path: Path) -> None:
    e = examined(tmp_path, DESIGNS[name])
    assert e.holds, [str((c.part, c.site, c.check, c.safety_factor)) for c in e.falls_short]
    part = "tie" if name in ("slide", "rocker") else "chain_end"
    assert {"tie", "chain_end"} & {p.key for p in e.parts} == {part}
    assert {c.part for c in e.checks} >= {part}
    assert any(site.part == part for site in e.sites)


@pytest.mark.parametrize("name", DESIGNS)
def test_the_frame_is_pulled_by_nothing_but_forces_that_cancel(name: str, tmp_path: Path) -> None:
    e = examined(tmp_path, DESIGNS[name])
    at = {s.site: s.force for s in e.sites if s.part == "frame"}
    far = at["output" if "tie" in DESIGNS[name] else "sheave"]
    total = at["main_bearing"] + far + at["spring_anchor"]
    assert np.abs(total).max() <= 1e-9 * np.abs(at["main_bearing"]).max()


def test_a_rope_by_hand(tmp_path: Path) -> None:
    """6x36-IWRC 12: 0.356 · 12² · 1770 = 90.74 kN (EN 12385-4), 0.9 of it in a pressed ferrule: 81.66 kN."""
    e = examined(tmp_path, DESIGNS["rope"])
    strand = row(e, "rope", "tension")
    assert strand.capacity == pytest.approx(0.356 * 144 * 1770 * 0.9, rel=1e-9)
    assert strand.demand == pytest.approx(1.25 * float(e.figures.largest_tension), rel=1e-9)
    assert strand.target == 5.0
    other = examined(tmp_path, DESIGNS["rope"] + 'grade = 1960\nend = "poured socket"\n')
    assert row(other, "rope", "tension").capacity == pytest.approx(0.356 * 144 * 1960, rel=1e-9)
    # sheave by the least ratio of the construction, 23 rope diameters
    assert e.design.sheave is not None
    assert 2.0 * e.design.sheave.pitch_radius == pytest.approx(23 * 12)
    pin, shear = e.sizes.chain_end.pin_diameter, row(e, "rope_connecting_pin", "pin shear")
    f_u = e.sizes.chain_pin.material.ultimate_strength(pin)
    assert shear.capacity == pytest.approx(float(pin_shear_capacity(pin, f_u)))
    assert shear.demand == pytest.approx(strand.demand / 2.0)


def test_webbing_by_hand(tmp_path: Path) -> None:
    """60 mm: 2 t by 7 (EN 1492-1) is 137.3 kN; the factor asked for is the same 7."""
    strand = row(examined(tmp_path, DESIGNS["webbing"]), "webbing", "tension")
    assert strand.capacity == pytest.approx(7 * 2000 * 9.80665)
    assert strand.target == 7.0


def test_a_fork_s_bridge_by_hand(tmp_path: Path) -> None:
    """Half the pull in each cheek, the pin's pull spread evenly: F/2 (slot + cheek)/2 − F/2 · width/4 in the middle."""
    e = examined(tmp_path, DESIGNS["webbing"])
    end, bridge = e.sizes.chain_end, row(e, "chain_end", "bending")
    slot = 2.0 * end.slots[0][1]
    force = 1.25 * float(e.figures.largest_tension)
    cheek = (end.width - slot) / 2.0
    assert bridge.demand == pytest.approx(force / 2.0 * ((slot + cheek) / 2.0 - end.width / 4.0), rel=1e-6)
    depth = end.length - (end.slot_depth - end.height / 2.0) - e.sizes.chain_pin.middle_diameter / 2.0
    f_y = end.material.yield_strength(end.width)
    assert bridge.capacity == pytest.approx(f_y * end.height * depth**2 / 6.0)


def test_a_tie_by_hand(tmp_path: Path) -> None:
    """Section w t f_y; thin strut by Euler, π² E/(L/r)² w t, or Johnson; 6 mm plate in 260 mm is L/r = 150."""
    e = examined(tmp_path, DESIGNS["slide"] + 'push = "3 kN"\n')
    t, w, steel = e.sizes.chain_end.width, e.sizes.chain_end.height, e.sizes.chain_end.material
    f_y = steel.yield_strength(t)
    assert row(e, "tie", "gross section").capacity == pytest.approx(f_y * w * t)
    slender = 260.0 * math.sqrt(12.0) / t
    assert slender > math.sqrt(2.0 * math.pi**2 * steel.youngs_modulus / f_y)
    thin = row(e, "tie", "strut about the thin side")
    assert thin.capacity == pytest.approx(math.pi**2 * steel.youngs_modulus / slender**2 * w * t)
    assert thin.demand == 3000.0
    flat = row(e, "tie", "strut in the plane of the disc")
    around = 260.0 * math.sqrt(12.0) / w
    johnson = f_y * (1.0 - f_y * around**2 / (4.0 * math.pi**2 * steel.youngs_modulus))
    assert flat.capacity == pytest.approx(johnson * w * t)


WEAK: dict[str, tuple[str, str, set[str]]] = {
    "thin rope": ("rope", DESIGNS["rope"].replace("IWRC 12", "IWRC 8"), {"rope/tension"}),
    "tight sheave": (
        "rope", DESIGNS["rope"].replace("[sheave]", '[sheave]\npitch_radius = "90 mm"'),
        {"sheave/rope bends over the sheave"},
    ),
    "thick pin for the thimble": (
        "rope", DESIGNS["rope"] + 'eye_pin = "9 mm"\n', {"rope_connecting_pin/pin passes the fitting"}
    ),
    "thin webbing": (
        "webbing", DESIGNS["webbing"] + 'min_breaking_force = "60 kN"\n', {"webbing/tension"}
    ),
    "slender tie": (
        "slide", DESIGNS["slide"].replace('"260 mm"', '"700 mm"') + 'thickness = "6 mm"\nwidth = "30 mm"\n',
        {"tie/strut about the thin side"},
    ),
    "narrow tie": (
        "slide", DESIGNS["slide"] + 'width = "18 mm"\n',
        {"tie/net tension", "tie/net tension, pin-connected plate", "tie/end shear", "tie/fracture beyond the hole"},
    ),
    "thin output pin": (
        "slide", DESIGNS["slide"] + 'pin_diameter = "5 mm"\n',
        {"output_pin/pin bending", "output_pin/pin shear with bending"},
    ),
    "oblique rocker": (
        "rocker", DESIGNS["rocker"].replace('"300 mm"]', '"200 mm"]').replace('arm = "300 mm"', 'arm = "205 mm"'),
        {"output/transmission angle", "chain_pin/holds against turning"},
    ),
}  # fmt: skip


@pytest.mark.parametrize("name", WEAK)
def test_a_weak_far_end_is_caught(name: str, tmp_path: Path) -> None:
    kind, text, wanted = WEAK[name]
    assert examined(tmp_path, DESIGNS[kind]).holds
    short = {f"{c.part}/{c.check}" for c in examined(tmp_path, text).falls_short}
    assert wanted & short, short
    parts = {part for part, _, _ in (entry.partition("/") for entry in wanted)} | {"chain_end", "tie", "output"}
    assert {entry.partition("/")[0] for entry in short} <= parts, short


def refused(folder: Path, text: str) -> str:
    with pytest.raises(DesignRefused) as refusal:
        examined(folder, text)
    return str(refusal.value)


REFUSED: dict[str, tuple[str, list[str]]] = {
    "none": (DESIGNS["slide"].partition("[tie]")[0], ["chain: missing", "[chain], [rope], [webbing] or [tie]"]),
    "two": (DESIGNS["rope"] + '[chain]\ndesignation = "08B"\n', ["rope: two far ends", "without [chain]"]),
    "a sheave for a tie": (
        DESIGNS["slide"] + '[sheave]\ncenter = ["400 mm", "0 mm"]\n[chain_end]\nwidth = 20\n',
        ["sheave: a tie has none", "chain_end: a tie has none"],
    ),
    "no sheave": (DESIGNS["rope"].replace('[sheave]\ncenter = ["600 mm", "35 mm"]\n', ""), ["sheave: missing"]),
    "a rope nearly listed": (
        DESIGNS["rope"].replace("6x36-IWRC 12", "6x36-IWRC 12.5"), ["rope.designation: not listed", "6x36-IWRC 12"]
    ),
    "half an own rope": (
        DESIGNS["rope"].replace('designation = "6x36-IWRC 12"', 'diameter = "12 mm"'),
        ["rope.min_breaking_force: missing"],
    ),
    "an end nobody sells": (DESIGNS["rope"] + 'end = "thimble with ferrule"\n', ['"thimble with pressed ferrule"']),
    "an odd webbing": (DESIGNS["webbing"].replace('"60 mm"\n', '"64 mm"\n', 1), ["webbing.width: not listed", "60"]),
    "a short tie": (DESIGNS["slide"].replace('"260 mm"', '"100 mm"'), ["tie.length", "folds flat"]),
    "keys of the other output": (
        DESIGNS["slide"] + 'output = "slide"\narm = "100 mm"\n', ["tie.arm: a slide has none"]
    ),
    "a pivot out of reach": (
        DESIGNS["rocker"].replace('"380 mm"', '"1380 mm"'), ["tie.pivot", "crank_radius + link_length + length"]
    ),
    "no direction": (DESIGNS["slide"].replace('draw_direction = "180 deg"\n', ""), ["tie.draw_direction: missing"]),
    "an unknown material": (DESIGNS["slide"] + 'material = "S690"\n', ["tie.material: not listed", "S690QL"]),
}  # fmt: skip


@pytest.mark.parametrize("name", REFUSED)
def test_what_cannot_be_is_refused_with_what_could(name: str, tmp_path: Path) -> None:
    text, wanted = REFUSED[name]
    said = refused(tmp_path, text)
    for words in wanted:
        assert words in said, said


def test_a_far_end_s_table_alone_is_said_once(tmp_path: Path) -> None:
    said = refused(tmp_path, DESIGNS["slide"] + 'material = "S690"\n')
    assert said.count("tie.material") == 1
