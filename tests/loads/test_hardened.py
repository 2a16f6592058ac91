"""Hardened pins, stop and flank: Hertz contact on the surface, sections on the core, cases against the depth of shear."""

from __future__ import annotations

import math
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from exporters.from_memory import from_memory
from exporters.parts_list import items
from loads.checks import pins, stop
from loads.examine import Examination
from loads.practice import source
from loads.records import Check
from parts.contact_lengths import stop_on_link
from parts.design import Material
from parts.hardening import hardened, hardness_note, section_words, state
from tests.starters import changed, examined, text_of

CORE = Material(
    "bar", "case-hardening bar", 206e3, 0.3, 7850.0, ((16.0, 900.0), (40.0, 600.0)), ((16.0, 1100.0), (40.0, 900.0)),
    "a test", True,
)  # fmt: skip


def row(e: Examination, part: str, check: str) -> Check:
    return next(c for c in e.checks if (c.part, c.check) == (part, check))


def test_contact_width_and_depth_by_hand() -> None:
    """Two steels, E 206 GPa, ν 0.3: E* = 113 187 MPa. 10 kN over 20 mm on a radius of 12.5 mm.

    b = sqrt(4 · 10 000 · 12.5 / (π · 20 · 113 187)) = sqrt(0.070306) = 0.26515 mm; z = 0.20841 mm; case 0.41682 mm.
    """
    modulus = 206e3 / (2 * (1 - 0.09))
    b = float(stop.contact_half_width(10e3, 20.0, 12.5, modulus))
    assert b == pytest.approx(0.26515, abs=2e-5)
    assert float(stop.greatest_shear_depth(b)) == pytest.approx(0.20841, abs=2e-5)
    assert float(stop.least_case_depth(10e3, 20.0, 12.5, modulus)) == pytest.approx(0.41682, abs=4e-5)
    # Johnson equations 4.43 and 4.45 together: p0 = 2 P/(π a), P the force on a length
    assert float(stop.line_contact_pressure(10e3, 20.0, 12.5, modulus)) == pytest.approx(2 * 500 / (math.pi * b))


def test_the_greatest_shear_lies_at_0_786_of_the_half_width() -> None:
    """From the stresses on the axis below a line contact, Johnson equations 4.46: 0.300 p0 at 0.786 a."""
    z = np.linspace(0.0, 3.0, 300_001)
    root = np.sqrt(1.0 + z**2)
    across, down = -((1.0 + 2.0 * z**2) / root - 2.0 * z), -1.0 / root
    shear = np.abs(across - down) / 2.0
    i = int(np.argmax(shear))
    assert float(stop.greatest_shear_depth(1.0)) == pytest.approx(z[i], abs=5e-4)
    assert shear[i] == pytest.approx(0.300, abs=5e-4)
    # first yield by Tresca, as for the core: 0.3 p0 = f_y/2
    assert pins.core_pressure_limit(600.0) == pytest.approx(300.0 / shear[i], rel=3e-3)


def test_hardened_through_is_the_whole_section_and_a_case_is_not() -> None:
    through, case = hardened(CORE, 1500.0, None), hardened(CORE, 1500.0, 0.8)
    assert through.yield_strength(30.0) == through.surface_strength(30.0) == 1500.0
    assert through.ultimate_strength(30.0) == 1500.0
    assert through.largest_size == CORE.largest_size
    assert case.surface_strength(30.0) == 1500.0
    assert (case.yield_strength(30.0), case.ultimate_strength(10.0)) == (600.0, 1100.0)
    flank = hardened(CORE, 1500.0, None, whole=False)
    assert (flank.yield_strength(30.0), flank.surface_strength(30.0)) == (600.0, 1500.0)
    assert hardened(CORE, None, None) == CORE
    assert [state(m) for m in (CORE, through, case, flank)] == [
        "", "through-hardened", "case 0.8 mm", "hardened surface",
    ]  # fmt: skip
    assert section_words(case) == "; core under a case 0.8 mm"
    assert hardness_note(CORE, "metric") == ()
    assert hardness_note(case, "metric") == ("hardened to a surface yield strength of 1500 MPa, case 0.8 mm deep",)
    assert hardness_note(replace(through, surface_yield=1378.9514), "us") == (
        "hardened to a surface yield strength of 200 ksi, depth of the case not given",
    )


SOFT = {"stop__diameter": '"8 mm"', "stop__style": '"post"'}


def test_a_post_and_flank_count_by_their_surfaces_and_the_weaker_governs(tmp_path: Path) -> None:
    """The contact's capacity goes with the square of the weaker yield strength; sections stay on the core."""
    plain = examined(tmp_path, changed("soil-tamper", **SOFT))
    link = plain.sizes.link.material.yield_strength(plain.sizes.link.thickness)
    post = plain.sizes.stop.material.yield_strength(8.0)
    weak = min(link, post)
    case = {"stop__surface_yield": '"1400 MPa"', "stop__case_depth": '"1.2 mm"'}
    flank = {"link__surface_yield": '"1100 MPa"', "link__case_depth": '"1.5 mm"'}
    one = examined(tmp_path, changed("soil-tamper", **SOFT, **case))
    both = examined(tmp_path, changed("soil-tamper", **SOFT, **case, **flank))
    contact = [row(e, "stop", "contact").capacity for e in (plain, one, both)]
    assert contact[1] / contact[0] == pytest.approx((min(link, 1400.0) / weak) ** 2)
    assert contact[2] / contact[0] == pytest.approx((1100.0 / weak) ** 2)
    assert "post case 1.2 mm" in row(both, "stop", "contact").method
    for check in ("post bending", "post shear"):
        assert row(both, "stop", check).capacity == row(plain, "stop", check).capacity
    through = examined(tmp_path, changed("soil-tamper", **SOFT, stop__surface_yield='"1400 MPa"'))
    bending = row(through, "stop", "post bending")
    assert bending.capacity / row(plain, "stop", "post bending").capacity == pytest.approx(1400.0 / post)
    assert "through-hardened" in bending.method
    assert not [c for c in through.checks if c.check == "case depth"]


def test_a_thin_case_falls_short_on_post_and_flank(tmp_path: Path) -> None:
    thin = {"stop__surface_yield": '"1400 MPa"', "stop__case_depth": '"0.05 mm"'}
    flank = {"link__surface_yield": '"1400 MPa"', "link__case_depth": '"3 mm"'}
    e = examined(tmp_path, changed("soil-tamper", **SOFT, **thin, **flank))
    assert ("stop", "case depth") in {(c.part, c.check) for c in e.falls_short}
    one, other = row(e, "stop", "case depth"), row(e, "swing_link", "case depth")
    push = row(e, "stop", "contact").demand
    touch = stop_on_link("post", 8.0, e.sizes.stop.height, e.sizes.link.thickness, e.sizes.plate_gap)
    modulus = stop.contact_modulus(e.sizes.stop.material, e.sizes.link.material)
    assert one.demand == pytest.approx(2 * 0.786 * math.sqrt(4 * push * 4.0 / (math.pi * touch * modulus)))
    assert (one.capacity, one.target, one.unit) == (0.05, 1.0, "mm")
    assert (other.demand, other.capacity, other.holds) == (one.demand, 3.0, True)


def test_a_flank_without_its_depth_says_so(tmp_path: Path) -> None:
    e = examined(tmp_path, changed("soil-tamper", **SOFT, link__surface_yield='"1400 MPa"'))
    assert stop.NO_DEPTH in row(e, "stop", "contact").note
    assert not [c for c in e.checks if c.check == "case depth"]


@pytest.mark.parametrize("depth", ["0.6 mm", None])
def test_a_hardened_post_is_proportioned_smaller_by_the_same_formulas(tmp_path: Path, depth: str | None) -> None:
    bare = {
        "stop__diameter": None,
        "stop__length": None,
        "stop__width": None,
        "stop__style": '"post"',
        "link__surface_yield": '"1400 MPa"',
    }
    hard = {"stop__surface_yield": '"1400 MPa"', "stop__case_depth": None if depth is None else f'"{depth}"'}
    hard = {key: value for key, value in hard.items() if value is not None}
    soft = examined(tmp_path, changed("seed-thrower", **bare))
    e = examined(tmp_path, changed("seed-thrower", **bare, **hard))
    assert e.sizes.stop.diameter < soft.sizes.stop.diameter
    assert not [c for c in e.falls_short if c.part == "stop"]


def test_pins_keep_the_plates_side_and_the_core(tmp_path: Path) -> None:
    """A case does nothing for shear, bending or bearing; contact in the eye goes by the plate's yield strength."""
    soft = {"crank_pin__material": '"S355J2"', "crank_pin__diameter": '"20 mm"'}
    plain = examined(tmp_path, changed("impact-rig", **soft))
    case = {"crank_pin__surface_yield": '"1400 MPa"', "crank_pin__case_depth": '"1 mm"'}
    e = examined(tmp_path, changed("impact-rig", **soft, **case))
    for part, check in (("crank_pin", "pin shear"), ("crank_pin", "pin bending"), ("swing_link", "bearing")):
        assert row(e, part, check).capacity == row(plain, part, check).capacity
    link = e.sizes.link
    assert row(e, "crank_pin", "contact in the eye").capacity == 2.5 * link.material.yield_strength(link.thickness)
    assert row(e, "crank_pin", "core under the case").capacity == pytest.approx(1.67 * 345.0)
    assert "case 1 mm" in row(e, "crank_pin", "pin bending").method
    assert not [c for c in plain.checks if c.check == "core under the case"]
    through = examined(tmp_path, changed("impact-rig", **soft, crank_pin__surface_yield='"1400 MPa"'))
    assert row(through, "crank_pin", "pin bending").capacity == pytest.approx(
        1400.0 / 345.0 * row(plain, "crank_pin", "pin bending").capacity
    )


def test_a_hardened_block_gains_nothing_but_its_note(tmp_path: Path) -> None:
    block = {"stop__style": '"block"', "stop__diameter": None}
    plain = examined(tmp_path, changed("soil-tamper", **block))
    hard = examined(tmp_path, changed("soil-tamper", **block, stop__surface_yield='"1400 MPa"'))
    mine = [[(c.check, c.capacity) for c in e.checks if c.part == "stop"] for e in (plain, hard)]
    assert mine[0] == mine[1]
    assert "1400 MPa" in next(i.note for i in items(hard) if i.part == "Stop block")


def test_the_parts_list_tells_the_heat_treater(tmp_path: Path) -> None:
    case = {"chain_pin__surface_yield": '"1300 MPa"', "chain_pin__case_depth": '"0.8 mm"'}
    flank = {"link__surface_yield": '"1000 MPa"', "link__case_depth": '"1 mm"'}
    e = examined(tmp_path, changed("soil-tamper", **SOFT, **case, **flank, stop__surface_yield='"1400 MPa"'))
    found = {item.part: item for item in items(e)}
    assert "surface yield strength of 1300 MPa, case 0.8 mm deep" in found["Chain pin"].note
    assert "surface yield strength of 1400 MPa, through" in found["Stop post"].note
    assert found["Stop post"].process == "turn, harden, grind"
    assert any("stop flank hardened" in item.note for item in items(e))


def test_what_practice_has_from_memory_is_passed_on(tmp_path: Path) -> None:
    assert source("key").endswith("; yield strength of the key steel from memory, confirm")
    assert source("plain").endswith("; widths of bushes from memory, confirm")
    for words in ("least teeth of a chain wheel", "cheek of the sheave's pin", "gap beside the sheave"):
        assert words in source("sheave")
    assert "from memory" not in source("rolling")
    said = " ".join(from_memory(examined(tmp_path, text_of("impact-rig"))))
    assert "widths of bushes" in said
    assert "cheek of the sheave's pin" in said
