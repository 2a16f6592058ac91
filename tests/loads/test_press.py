"""Press joints: Lamé against a worked example and a second solution, fits against another table, bad fits caught."""

from __future__ import annotations

import math
from pathlib import Path

import isofits
import numpy as np
import pytest
from scipy import integrate

from loads.checks import press
from loads.examine import Examination
from loads.practice import press_fits
from parts.design import Material
from parts.fits import classes_of, covers, fit_classes, interference
from parts.outline import Plate
from parts.problems import DesignRefused
from tests.starters import NAMES, changed, examined, text_of


def metal(modulus: float = 200e3, nu: float = 0.3, f_y: float = 700.0) -> Material:
    return Material("m", "own", modulus, nu, 7850.0, ((math.inf, f_y),), ((math.inf, f_y),), "", True)


def test_worked_example_of_a_press_fit() -> None:
    """Pin 50, ring 80, length 40 mm, interference 0.04 mm, E 200 GPa, μ 0.15, as worked in public calculators' notes:
    48.75 MPa, 45.95 kN, 1149 N·m, hoop stress 111.3 MPa."""
    steel = metal()
    p = float(press.fit_pressure(0.04, 50.0, 80.0, steel, steel))
    assert p == pytest.approx(48.75, abs=0.005)
    force = float(press.holding_force(p, 50.0, 40.0, 0.15))
    assert force == pytest.approx(45_950.0, abs=5.0)
    assert force * 25.0 / 1e6 == pytest.approx(1.149, abs=5e-4)
    assert float(press.hoop_stress(p, 50.0, 80.0)) == pytest.approx(111.3, abs=0.05)


@pytest.mark.parametrize(
    ("outer", "inner"), [(metal(), metal()), (metal(70e3, 0.33), metal(210e3)), (metal(), metal(70e3))]
)
def test_pressure_against_a_second_solution_of_the_ring(outer: Material, inner: Material) -> None:
    """u'' + u'/r − u/r² = 0 in the ring, integrated numerically from its free edge; the pin is pressed evenly."""
    d, d_o, delta = 14.0, 31.0, 0.02
    a, b, nu = d / 2, d_o / 2, outer.poissons_ratio
    # free edge: du/dr = −ν u/b there; any size of u will do
    back = integrate.solve_ivp(
        lambda r, y: [y[1], y[0] / r**2 - y[1] / r], (b, a), [1.0, -nu / b], rtol=1e-10, atol=1e-12
    )
    u, slope = back.y[0, -1], back.y[1, -1]
    unit = outer.youngs_modulus / (1 - nu**2) * (slope + nu * u / a)  # radial stress at the bore, for that u
    scale = -1.0 / unit  # per MPa of pressure
    grown = u * scale
    shrunk = (1 - inner.poissons_ratio) / inner.youngs_modulus * a
    assert float(press.fit_pressure(delta, d, d_o, outer, inner)) == pytest.approx(
        delta / 2 / (grown + shrunk), rel=1e-6
    )
    hoop = outer.youngs_modulus / (1 - nu**2) * (u / a + nu * slope) * scale
    assert float(press.hoop_stress(1.0, d, d_o)) == pytest.approx(hoop, rel=1e-6)


def test_stress_of_one_metal_in_closed_form() -> None:
    """With pin and ring of one metal the bore's equivalent stress is E δ/(2 d) sqrt(3 + (d/D)⁴)."""
    steel = metal(210e3)
    for d, d_o, delta in ((8.0, 12.0, 0.01), (20.0, 200.0, 0.03)):
        p = press.fit_pressure(delta, d, d_o, steel, steel)
        wanted = 210e3 * delta / (2 * d) * math.sqrt(3 + (d / d_o) ** 4)
        assert float(press.ring_stress(p, d, d_o)) == pytest.approx(wanted)
    assert float(press.fit_pressure(-0.01, 8.0, 12.0, steel, steel)) == 0.0


@pytest.mark.parametrize("moment", [0.0, 1e3, 20e3, 50e3, 400e3])
def test_grip_is_the_sum_of_what_presses(moment: float) -> None:
    force, s = 10e3, 15.0
    whole = integrate.quad(lambda z: abs(force / s + 12 * moment / s**3 * z), -s / 2, s / 2, limit=200)[0]
    assert float(press.seat_grip(np.array(force), np.array(moment), s)) == pytest.approx(whole, rel=1e-5)


@pytest.mark.parametrize("fit", [*press_fits(), "H7/h6", "H8/f7", "H7/k6", "H11/h11", "F8/h9"])
def test_interference_over_the_whole_range_against_isofits(fit: str) -> None:
    hole, shaft = classes_of(fit)
    for nominal in range(4, 251):
        hole_up, hole_low = isofits.isotol("hole", nominal, hole, "both")
        shaft_up, shaft_low = isofits.isotol("shaft", nominal, shaft, "both")
        wanted = (shaft_low - hole_up) / 1000, (shaft_up - hole_low) / 1000
        assert interference(fit, nominal) == pytest.approx(wanted, abs=1e-9), nominal


def test_fits_are_split_into_listed_classes() -> None:
    assert classes_of(" H7 / r6") == ("H7", "r6")
    for wrong, near in (("H7/q6", "H7/"), ("h7/r6", "H7/r6"), ("H9/f8", "H8/f7"), ("", "H7/h6"), ("r6/H7", "H7/")):
        with pytest.raises(ValueError) as refusal:
            classes_of(wrong)
        assert str(refusal.value).startswith(near)
        hole, shaft = str(refusal.value).split("/")
        assert {hole, shaft} <= set(fit_classes())
    assert covers(250.0)
    assert not covers(250.1)


def row(e: Examination, part: str, site: str, check: str) -> float:
    c = next(c for c in e.checks if (c.part, c.site, c.check) == (part, site, check))
    assert c.safety_factor is not None
    return c.safety_factor / c.target


@pytest.mark.parametrize("name", NAMES)
def test_starters_choose_their_fits_and_say_why(name: str, tmp_path: Path) -> None:
    e = examined(tmp_path, text_of(name))
    chosen = {a.key: a for a in e.assumed if a.key.startswith("fits.")}
    assert {"fits.crank_pin_disc", "fits.crank_pin_link", "fits.chain_pin_link", "fits.chain_end"} <= set(chosen)
    assert all(a.why for a in chosen.values())
    assert ("fits.dowel" in chosen) == (e.sizes.stop.style == "block")
    assert ("fits.stop_disc" in chosen) == (e.sizes.stop.style == "post")
    assert row(e, "crank_disc", "crank_pin_hole", "fit stress") >= 1
    assert row(e, "crank_pin", "root", "holds against turning") >= 1


BAD = {
    "loose": ({"fits__crank_pin_disc": '"H7/g6"'}, {("crank_disc", "interference")}),
    "too tight": (
        {"fits__crank_pin_disc": '"H7/s6"', "disc__material": '"S235JR"', "disc__thickness": '"30 mm"'},
        {("crank_disc", "fit stress")},
    ),
    "no room to run": ({"fits__crank_pin_link": '"H7/n6"'}, {("swing_link", "room to run")}),
    "loose dowels": ({"fits__dowel": '"H8/f7"'}, {("crank_disc", "interference")}),
}


@pytest.mark.parametrize("name", BAD)
def test_a_bad_fit_is_caught_by_its_own_check(name: str, tmp_path: Path) -> None:
    changes, wanted = BAD[name]
    e = examined(tmp_path, changed("impact-rig", **changes))
    missed = {(c.part, c.check) for c in e.falls_short}
    assert wanted <= missed
    if "material" not in str(changes):
        assert missed == wanted


def test_a_soft_plate_gets_a_lighter_fit(tmp_path: Path) -> None:
    e = examined(tmp_path, changed("impact-rig", disc__material='"S235JR"'))
    loosest, tightest = press_fits()[-1], press_fits()[0]
    assert e.sizes.fits.crank_pin_disc not in (tightest,)
    assert interference(e.sizes.fits.crank_pin_disc, 20.0) >= interference(loosest, 20.0)


def test_a_pin_beyond_the_tables_falls_short_and_is_no_crash(tmp_path: Path) -> None:
    own = '\n[materials.big]\nyield = 800\nultimate = 950\nyoungs_modulus = 210000\ndensity = 7850\nsource = "own"\n'
    text = changed("seed-thrower", stop__diameter='"260 mm"', stop__material='"big"') + own
    e = examined(tmp_path, text)
    assert ("crank_disc", "size listed for fits") in {(c.part, c.check) for c in e.falls_short}


def test_fits_reach_the_holes(tmp_path: Path) -> None:
    e = examined(
        tmp_path,
        changed(
            "impact-rig", fits__crank_pin_disc='"H8/s6"', fits__crank_pin_link='"F8/h9"', fits__chain_end='"H11/h11"'
        ),
    )
    bodies = {p.key: p.body for p in e.parts}
    holes: dict[tuple[str, str], str | None] = {}
    for key, body in bodies.items():
        if isinstance(body, Plate):
            holes |= {(key, h.name): h.fit for h in body.holes}
    assert holes["crank_disc", "crank_pin_hole"] == "H8"
    assert holes["swing_link", "crank_pin_eye"] == "F8"
    assert holes["chain_end", "chain_pin_eye"] == "H11"
    assert "s6" in next(p.notes[0] for p in e.parts if p.key == "crank_pin")


def test_an_unknown_fit_is_refused_with_the_nearest(tmp_path: Path) -> None:
    with pytest.raises(DesignRefused) as refusal:
        examined(tmp_path, changed("impact-rig", fits__dowel='"H7/m5"'))
    problem = refusal.value.problems[0]
    assert problem.key == "fits.dowel"
    assert '"H7/m6"' in problem.accepted
