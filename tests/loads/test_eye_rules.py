"""Eyes by AISC, BTH-1 and Melcon-Hoblit: published worked numbers, limits, and what a bill shows."""

from __future__ import annotations

import math
from pathlib import Path

import numpy as np
import pytest

from loads.checks import bth, eyes, oblique
from tests.starters import NAMES, examined, text_of

KSI, INCH, KIP = 6.894757, 25.4, 4448.2216


def test_bth_worked_number() -> None:
    """Fu 58 ksi, Fy 36 ksi, t 0.75 in, be 1.0625 in, pin 0.75 in in a 0.875 in hole, R 1.5 in, Nd 3: from the equations."""
    f_u, f_y, t, d_p, d_h, b_e = 58 * KSI, 36 * KSI, 0.75 * INCH, 0.75 * INCH, 0.875 * INCH, 1.0625 * INCH
    design = 1.20 * 3.0  # what the standard divides by, and the checks do not
    c_r = float(bth.clearance_factor(d_p, d_h))
    assert c_r == pytest.approx(0.85835, abs=1e-5)
    b_eff = float(bth.effective_width(b_e, t, d_h, f_y, f_u))
    assert b_eff / INCH == pytest.approx(0.93206, abs=1e-5)
    assert float(bth.tensile_strength(c_r, f_u, t, b_eff)) / KIP / design == pytest.approx(19.334, abs=1e-3)
    single = float(bth.single_plane_strength(c_r, f_u, t, 1.5 * INCH, d_h, b_e))
    assert single / KIP / design == pytest.approx(17.031, abs=1e-3)


def test_bth_shear_and_bearing_by_hand() -> None:
    """Same pin, a = 1.0625 in: φ = 55° × 0.75/0.875 = 47.143°, 1 − cos φ = 0.31975; A_v = 2 (1.0625 + 0.11991) 0.75 in²."""
    area = 2.0 * (1.0625 + 0.375 * (1.0 - math.cos(math.radians(55.0 * 0.75 / 0.875)))) * 0.75
    assert area == pytest.approx(1.7736, abs=1e-4)
    found = float(bth.shear_strength(58 * KSI, 0.75 * INCH, 1.0625 * INCH, 0.75 * INCH, 0.875 * INCH))
    assert found / KIP == pytest.approx(0.70 * 58.0 * area, rel=1e-6)
    assert float(bth.bearing_strength(36.0, 0.75, 0.75)) == pytest.approx(1.25 * 36.0 * 0.5625)
    assert float(bth.turning_bearing_strength(36.0, 0.75, 0.75)) == pytest.approx(0.63 * 36.0 * 0.5625)


def test_bth_effective_width_has_three_limits() -> None:
    assert float(bth.effective_width(10.0, 2.0, 50.0, 250.0, 400.0)) == 8.0  # 4t
    assert float(bth.effective_width(10.0, 20.0, 400.0, 250.0, 400.0)) == 10.0  # b_e itself
    assert float(bth.effective_width(40.0, 20.0, 10.0, 250.0, 400.0)) == pytest.approx(0.6 * 40.0 * 1.6 * 0.5)
    assert float(bth.clearance_factor(20.0, 20.0)) == 1.0


def test_transverse_curve_by_two_readings() -> None:
    """Another reading of the same chart, a polynomial from 0 to 1.4: the curve differs by no more than 0.03."""
    x = np.arange(0.1, 1.41, 0.1)
    other = np.polyval([-0.8673, 3.3352, -4.4913, 2.4227, -0.7468, 1.3913, -0.0106], x)
    side = np.array([_side(float(r)) for r in x])
    found = oblique.transverse_yield(side, side, 10.0, 1.0, 0.1)
    assert found == pytest.approx(other, abs=0.03)


def _side(ratio: float) -> float:
    """The even width round a 10 mm hole that has this A_av/A_br."""
    low, high = 0.0, 100.0
    for _ in range(60):
        middle = (low + high) / 2.0
        low, high = (middle, high) if float(oblique.average_area_ratio(middle, middle, 10.0)) < ratio else (low, middle)
    return low


def test_area_ratio_by_hand() -> None:
    """Hole 20, 10 mm left all round: A1 = A4 = 10 + 10 (1 − 1/√2) = 12.929; 6/(4/12.929 + 2/10)/20 = 0.5890."""
    assert float(oblique.average_area_ratio(10.0, 10.0, 20.0)) == pytest.approx(0.5890, abs=1e-4)


def test_oblique_interaction() -> None:
    """On the axis and across it each capacity stands alone; at equal shares all loads may grow by 2^0.625 less."""
    one, none = np.array([1.0]), np.array([0.0])
    assert float(oblique.oblique_use(one, none, 4.0, 2.0)[0]) == pytest.approx(0.25)
    assert float(oblique.oblique_use(none, -one, 4.0, 2.0)[0]) == pytest.approx(0.5)
    assert float(oblique.oblique_use(2.0 * one, one, 4.0, 2.0)[0]) == pytest.approx(0.5 * 2.0**0.625)
    # beyond 90° the axial part counts for nothing here
    assert float(oblique.oblique_use(-3.0 * one, one, 4.0, 2.0)[0]) == pytest.approx(0.5)
    k = float(oblique.oblique_use(2.0 * one, one, 4.0, 2.0)[0])
    assert (2.0 / k / 4.0) ** 1.6 + (1.0 / k / 2.0) ** 1.6 == pytest.approx(1.0)


def test_axial_yield_is_never_above_its_share_of_the_ultimate() -> None:
    for over, c in ((0.5, 1.0), (1.5, 1.0), (2.0, 0.93), (3.0, 0.71), (4.0, 0.71)):
        ultimate = over * 20.0 * 10.0 * 500.0
        assert float(oblique.axial_yield(ultimate, 20.0, 10.0, 350.0, 500.0)) == pytest.approx(c * 0.7 * ultimate)


def test_play_of_a_fit() -> None:
    """20 H8/f7: hole to +33 µm, shaft from −41 µm (ISO 286-2); a press fit has none, nor has a size beyond the tables."""
    assert eyes.largest_play("H8/f7", 20.0) == pytest.approx(0.074)
    assert eyes.largest_play("H7/r6", 20.0) == 0.0
    assert eyes.largest_play("H8/f7", 9999.0) == 0.0


@pytest.mark.parametrize("name", NAMES)
def test_both_standards_stand_side_by_side(name: str, tmp_path: Path) -> None:
    e = examined(tmp_path, text_of(name))
    by_eye: dict[tuple[str, str], dict[str, float]] = {}
    for row in e.checks:
        if row.part in ("swing_link", "chain_end") or row.site == "crank_pin_hole":
            by_eye.setdefault((row.part, row.site), {})[row.check] = row.margin
    pairs = ("net tension", "tear-out", "bearing")
    found = {at: rows for at, rows in by_eye.items() if "net tension" in rows}
    assert len(found) == 5
    for (part, site), rows in found.items():
        for check in pairs:
            assert f"{check}, BTH-1" in rows
        assert ("oblique load" in rows) == (part == "swing_link")
        turns = (part, site) in {("swing_link", "crank_pin_eye"), ("chain_end", "chain_pin_eye")}
        assert ("bearing, AISC" in rows) != turns
    order = [row.margin for row in e.checks]
    assert order == sorted(order)


def test_the_oblique_row_can_be_followed_by_hand(tmp_path: Path) -> None:
    """Crank pin eye of the large starter at the row's own crank angle, from the sizes alone."""
    e = examined(tmp_path, text_of("impact-rig"))
    row = next(r for r in e.checks if (r.site, r.check) == ("crank_pin_eye", "oblique load"))
    site = next(s for s in e.sites if (s.part, s.site) == ("swing_link", "crank_pin_eye"))
    i = int(np.flatnonzero(e.past.state.crank_angle == row.crank_angle)[0])
    f_x, f_y = site.force[0, i], site.force[1, i]
    z = e.sizes
    d, t, room = z.crank_pin.diameter, z.link.thickness, (z.link.width - z.crank_pin.diameter) / 2.0
    yields, ultimate = z.link.material.yield_strength(t), z.link.material.ultimate_strength(t)
    hole = d + eyes.largest_play("H8/f7", d)
    c_r = 1.0 - 0.275 * math.sqrt(1.0 - (d / hole) ** 2)
    net = ultimate * 2.0 * t * min(2.0 * t + 16.0, room, room / 1.33)
    net_bth = c_r * ultimate * 2.0 * t * min(room, 4.0 * t, 0.6 * ultimate / yields * math.sqrt(hole * room))
    ahead = room + hole / 2.0 - hole / 2.0
    single = c_r * ultimate * t * (1.13 * ahead + 0.92 * room / (1.0 + room / hole))
    tear = 0.6 * ultimate * 2.0 * t * (room + d / 2.0)
    phi = math.radians(55.0 * d / hole)
    tear_bth = 0.7 * ultimate * 2.0 * t * (room + d / 2.0 * (1.0 - math.cos(phi)))
    axial = yields / ultimate * min(net, net_bth, single, tear, tear_bth)  # C = 1: less than 1.5 d t F_tu
    corner = room + d / 2.0 * (1.0 - math.sqrt(0.5))
    ratio = 6.0 / (4.0 / corner + 2.0 / room) / d
    across = float(np.interp(ratio, [0.5, 0.6], [0.61, 0.72])) * d * t * yields
    use = ((max(0.0, -f_x) / axial) ** 1.6 + (abs(f_y) / across) ** 1.6) ** 0.625
    assert row.demand == pytest.approx(use, rel=2e-3)
