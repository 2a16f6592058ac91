"""What holds the bolts of a stop block at their ends: seat and thread, against published tables and by hand."""

from __future__ import annotations

import math
from pathlib import Path

import pytest

from loads.checks.bolts import (
    ThreadLimits,
    external_thread_area,
    internal_thread_area,
    punching_capacity,
    stripping_capacity,
    surface_pressure_limit,
    thread_limits,
    thread_pitch,
    widening,
)
from loads.examine import Examination
from loads.records import Check
from parts.design import Material
from parts.hardware import cap_screw
from tests.starters import changed, examined, text_of

# after Bickford, Introduction to the Design and Behavior of Bolted Joints, in a public table: strip areas in mm² of bolt
# and nut, 6g in 6H, over one diameter of thread
STRIP_AREAS = {
    (5.0, 0.8): (35.366, 49.994),
    (6.0, 1.0): (51.875, 73.145),
    (8.0, 1.25): (97.290, 134.63),
    (10.0, 1.5): (155.80, 214.77),
    (12.0, 1.75): (227.72, 313.41),
    (16.0, 2.0): (417.55, 569.12),
    (20.0, 2.5): (665.58, 907.76),
    (24.0, 3.0): (971.10, 1320.2),
    (30.0, 3.5): (1549.2, 2086.5),
}
# VDI 2230:2003, as a fastener maker prints it: tensile strength, limiting surface pressure, MPa
LISTED_PRESSURES = {
    "structural steel": [(340, 490), (470, 710), (510, 760)],
    "through-hardening bar": [(1000, 870), (1200, 1080), (900, 810), (700, 630)],
    "stainless": [(500, 630), (510, 460)],
    "aluminium": [(290, 260), (260, 230), (540, 410)],
    "titanium": [(890, 890)],
}


def plate(kind: str, ultimate: float) -> Material:
    return Material(
        "plate", kind, 210e3, 0.3, 7850.0, ((100.0, 0.8 * ultimate),), ((100.0, ultimate),), "made up", True
    )


def test_punching_of_a_published_example() -> None:
    """M20, d_m 30 mm, plate 8 mm of S235 (360 MPa), γM2 = 1.25: 130.288 kN, in a worked sheet to EN 1993-1-8."""
    assert punching_capacity(30.0, 8.0, 360.0) / 1.25 == pytest.approx(130288.0, abs=0.6)
    assert punching_capacity(30.0, -1.0, 360.0) == 0.0


@pytest.mark.parametrize("kind", LISTED_PRESSURES)
def test_surface_pressure_stays_below_what_is_listed(kind: str) -> None:
    for ultimate, listed in LISTED_PRESSURES[kind]:
        assert 0.5 * listed < surface_pressure_limit(plate(kind, ultimate), 10.0) <= listed
    assert surface_pressure_limit(plate("structural steel", 510.0), 10.0) == pytest.approx(433.5)  # 0.85 · 510
    assert surface_pressure_limit(plate("aluminium", 400.0), 10.0) == pytest.approx(300.0)  # 0.75 · 400


def test_strip_areas_of_a_thread_at_its_limits() -> None:
    """M10 6g by the limits in a public table of ISO 965, 6H by limits from memory: the areas that Bickford prints."""
    m10 = ThreadLimits(1.5, 9.732, 8.862, 8.676, 9.206)
    assert external_thread_area(m10, 10.0) == pytest.approx(155.80, abs=0.02)
    assert internal_thread_area(m10, 10.0) == pytest.approx(214.77, abs=0.02)
    found = thread_limits(10.0, 1.5)
    assert (found.d, found.d_2, found.D_1, found.D_2) == pytest.approx((9.732, 8.862, 8.676, 9.206), abs=0.007)


@pytest.mark.parametrize(("size", "areas"), STRIP_AREAS.items())
def test_strip_areas_against_a_published_table(size: tuple[float, float], areas: tuple[float, float]) -> None:
    """The tolerances are worked out, those of the table rounded: within 1.1 %."""
    d, pitch = size
    limits = thread_limits(d, pitch)
    assert external_thread_area(limits, d) == pytest.approx(areas[0], rel=0.011)
    assert internal_thread_area(limits, d) == pytest.approx(areas[1], rel=0.011)
    assert thread_pitch(d, math.pi / 4.0 * (d - 0.9382 * pitch) ** 2) == pytest.approx(pitch)


@pytest.mark.parametrize("thread", ["M6", "M8", "M10", "M12", "M16"])
def test_the_length_at_which_a_bolt_breaks_first(thread: str) -> None:
    """0.8 to 0.9 of the diameter for 8.8 in heat-treated steel above 800 MPa: VDI 2230, as a fastener maker prints it."""
    screw = cap_screw(thread)
    strength = 800.0 * screw.stress_area
    short, long = (stripping_capacity(screw, k * screw.diameter, 99.0, 1000.0) for k in (0.75, 0.9))
    assert short[0] < strength < long[0]
    assert long[1] == "the bolt's thread"


def test_a_soft_block_strips_before_its_bolt() -> None:
    """M10 over 10 mm in 300 MPa: 10 − 0.8 · 1.5 = 8.8 mm; 0.897 · 0.6 · 300 · 214.77 · 0.88 = 30.52 kN."""
    capacity, whose = stripping_capacity(cap_screw("M10"), 10.0, 99.0, 300.0)
    assert capacity == pytest.approx(30516.0, rel=0.006)
    assert whose == "the tapped thread"
    assert stripping_capacity(cap_screw("M10"), 1.0, 99.0, 300.0)[0] == 0.0  # less than the chamfers take


def test_a_thin_wall_widens() -> None:
    """s/d 1.5: 5.7 − 2.25 − 2.61 = 0.84; 1.9 and more: 1."""
    assert widening(15.0, 10.0) == pytest.approx(0.84)
    assert widening(18.9999, 10.0) == pytest.approx(1.0, abs=1e-4)
    assert widening(40.0, 10.0) == 1.0
    assert widening(8.0, 10.0) == 0.0
    wide, narrow = (stripping_capacity(cap_screw("M10"), 10.0, wall, 300.0)[0] for wall in (30.0, 7.5))
    assert narrow / wide == pytest.approx(0.84)


def row(e: Examination, part: str, site: str, check: str) -> Check:
    return next(c for c in e.checks if (c.part, c.site, c.check) == (part, site, check))


def test_the_rows_of_the_impact_rig_by_hand(tmp_path: Path) -> None:
    """M6 (20.1 mm²), preloaded 0.7 · 800 · 20.1 = 11 256 N, head 10 mm on a hole of 6.6 mm, disc 20 mm of 770 MPa.

    Ring π/4 (10² − 6.6²) = 44.33 mm². Floor 20 − 6 − 0.5 = 13.5 mm: 0.6 π · 10 · 13.5 · 770 = 195.9 kN. The bolts
    have 0.9 · 9 = 8.1 mm of thread, 7.3 mm without the chamfers: 51.875/6 · 7.3 = 63.11 mm², by 0.897 · 0.6 · 800 MPa
    27.17 kN.
    """
    e = examined(tmp_path, text_of("impact-rig"))
    assert (e.sizes.stop.bolt_thread, e.sizes.disc.thickness) == ("M6", 20.0)
    pull = row(e, "stop", "root", "bolt tension").demand
    head = row(e, "crank_disc", "stop_bolt_sink", "pressure under the bolt heads")
    assert head.demand == pytest.approx((11256.0 + pull) / 44.327, rel=1e-4)
    assert head.capacity == pytest.approx(654.5)
    floor = row(e, "crank_disc", "stop_bolt_sink", "punching under the bolt heads")
    assert floor.demand == pull
    assert floor.capacity == pytest.approx(195.9e3, rel=1e-3)
    thread = row(e, "stop", "root", "thread stripping")
    assert thread.demand == pytest.approx(11256.0 + pull)
    assert thread.capacity == pytest.approx(27174.0, rel=0.011)
    first = row(e, "stop", "root", "bolt breaks before its thread strips")
    assert first.demand == pytest.approx(16080.0)  # 800 · 20.1
    assert first.capacity == thread.capacity


SOFT: dict[str, str | None] = {
    "materials.putty__kind": '"structural steel"',
    "materials.putty__yield": "250",
    "materials.putty__ultimate": "300",
    "materials.putty__youngs_modulus": "210000",
    "materials.putty__density": "7850",
    "materials.putty__source": '"made up"',
}
WEAK: dict[str, tuple[dict[str, str | None], set[str]]] = {
    # 0.85 · 300 = 255 MPa under the heads
    "soft disc": ({"disc__material": '"putty"', **SOFT}, {"stop_bolt_sink/pressure under the bolt heads"}),
    "soft block": (
        {"stop__material": '"putty"', "stop__length": "25", "stop__width": "26", **SOFT},
        {"root/bolt breaks before its thread strips"},
    ),
    # 0.9 · 4 = 3.6 mm of thread
    "low block": (
        {"stop__height": "4", "stop__length": "25", "stop__width": "26"},
        {"root/thread stripping", "root/bolt breaks before its thread strips"},
    ),
    # the heads go through: no floor
    "thin disc": ({"disc__thickness": "6"}, {"stop_bolt_sink/punching under the bolt heads"}),
}


@pytest.mark.parametrize("name", WEAK)
def test_a_weak_end_of_a_bolt_is_caught(name: str, tmp_path: Path) -> None:
    changes, wanted = WEAK[name]
    e = examined(tmp_path, changed("impact-rig", **changes))
    assert e.sizes.stop.style == "block"
    assert wanted <= {f"{c.site}/{c.check}" for c in e.falls_short}
