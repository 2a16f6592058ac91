"""The study on whole machines: why histories are needed, what lives depend on, and that nothing counted is lost."""

from __future__ import annotations

from functools import lru_cache
from pathlib import Path
from tempfile import TemporaryDirectory

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from loads.examine import Examination
from loads.fatigue import study as module
from loads.fatigue.counting import closed, count_cycles, padded, turning_points
from loads.fatigue.fibres import Site, sites
from loads.fatigue.strength import SNLine, damage, goodman_factor, growth_to_failure
from loads.fatigue.study import FatigueRow, candidates, line_of, worst_fibres
from parts.design import Floats
from tests.starters import NAMES, changed, context_of, examined, fatigue_of


@lru_cache(maxsize=32)
def machine(name: str, shots: float = 20000.0, **values: str) -> Examination:
    with TemporaryDirectory() as folder:
        return examined(Path(folder), changed(name, fatigue__shots=f"{shots}", **values))


studied = fatigue_of


def row(e: Examination, part: str, site: str) -> FatigueRow:
    return next(r for r in studied(e).rows if (r.part, r.site) == (part, site))


def fibres(e: Examination, part: str, site: str) -> Site:
    return next(s for s in sites(context_of(e)) if (s.part, s.site) == (part, site))


def sn(values: tuple[float, float, float] = (770.0, 0.83, 240.0)) -> SNLine:
    return SNLine(*(np.array([[v]]) for v in (*values, 1e6, 1.0)))


@pytest.mark.parametrize("name", NAMES)
def test_every_part_that_is_stressed_is_in_it(name: str) -> None:
    e = machine(name)
    found = {r.part for r in studied(e).rows}
    assert {"swing_link", "crank_disc", "chain_end", "crank_pin", "chain_pin", "stop", "main_shaft", "chain"} <= found
    checks = [c for c in e.checks if c.check == "fatigue"]
    assert len(checks) == len(studied(e).rows)
    for check in checks:
        assert check.target == 1.0
        assert check.method
        assert check.source
        found_row = row(e, check.part, check.site)
        assert check.safety_factor == (None if found_row.factor is None else pytest.approx(found_row.factor))
        # the factor and the life say the same: it holds where the life reaches the stated shots
        if found_row.factor is not None:
            assert check.holds is (found_row.life is None or found_row.life >= studied(e).shots * (1.0 - 1e-6))


def test_no_study_without_its_table(tmp_path: Path) -> None:
    e = examined(tmp_path, changed("impact-rig"))
    assert "fatigue" not in e.studies
    assert not any(c.check == "fatigue" for c in e.checks)
    assert not any("atigue" in text for text in e.cautions)


def test_the_link_goes_from_tension_into_compression_and_zero_to_peak_is_not_safe() -> None:
    """On a flank the stress changes its sign in one shot. The same fibre taken from zero to its peak would live longer."""
    e = machine("impact-rig")
    site = fibres(e, "swing_link", "stop_flank")
    axial = next(s for s in e.sites if (s.part, s.site) == ("swing_link", "chain_pin_eye")).force[0]
    assert axial.max() > 0.0
    assert axial.min() < 0.0
    wish = e.design.fatigue
    assert wish is not None
    line = line_of(site, wish)
    found = worst_fibres([candidates(site.stress, line, wish.shots)], wish.shots)[0]
    history = site.stress[found.fibre]
    assert history.min() < -0.3 * history.max() < 0.0
    pulsating = np.array([[abs(history).max() / 2.0]])
    zero_to_peak = goodman_factor(pulsating, pulsating, line.strength(wish.shots), line.s_ut)[0, 0]
    assert found.growth < 0.95 * zero_to_peak


def test_the_pin_load_turns_round_in_the_disc() -> None:
    """No one point of the hole's edge has the greatest stress at every angle, and each has its own history."""
    site = fibres(machine("impact-rig"), "crank_disc", "crank_pin_hole")
    loaded = site.stress[:, np.max(np.abs(site.stress), axis=0) > 1.0]
    assert len(set(np.argmax(loaded, axis=0))) >= 5
    assert len({len(turning_points(loop)) for loop in closed(site.stress)}) > 1


@pytest.mark.parametrize("site", ["root"])
def test_a_pin_s_moment_turns(site: str) -> None:
    stress = fibres(machine("seed-thrower"), "crank_pin", site).stress
    # every fibre has its opposite, and together they have the whole moment
    assert stress[: len(stress) // 2] == pytest.approx(
        -stress[len(stress) // 2 :], rel=1e-9, abs=1e-9 * np.abs(stress).max()
    )


@pytest.mark.parametrize("name", NAMES)
def test_leaving_fibres_out_loses_none(name: str) -> None:
    """The bounds: counting every fibre of every feature finds the same worst growth."""
    e = machine(name)
    wish = e.design.fatigue
    assert wish is not None
    for site in sites(context_of(e)):
        line = line_of(site, wish)
        amplitude, mean, count = padded([count_cycles(turning_points(loop)) for loop in closed(site.stress)])
        start = np.full(len(amplitude), 1e-3)
        growth = growth_to_failure(amplitude, mean, count, line, wish.shots, start, np.full(len(amplitude), 1e3))
        assert growth.min() == pytest.approx(row(e, site.part, site.site).factor, rel=1e-5), (site.part, site.site)


@settings(max_examples=60)
@given(st.data())
def test_bounds_hold_for_any_histories(data: st.DataObject) -> None:
    many, n = data.draw(st.integers(1, 6)), data.draw(st.integers(1, 25))
    seed = data.draw(st.integers(0, 10**6))
    stress: Floats = np.random.default_rng(seed).uniform(-300.0, 500.0, (many, n)).round(-1)
    shots = data.draw(st.sampled_from([1.0, 300.0, 2e4, 1e6, 1e8]))
    if not np.any(stress):
        return
    amplitude, mean, count = padded([count_cycles(turning_points(loop)) for loop in closed(stress)])
    start = np.full(many, 1e-3)
    every = growth_to_failure(amplitude, mean, count, sn(), shots, start, np.full(many, 1e3))
    assert worst_fibres([candidates(stress, sn(), shots)], shots)[0].growth == pytest.approx(every.min(), rel=1e-4)


@settings(max_examples=60)
@given(st.integers(0, 10**6), st.floats(1.0, 3.0), st.floats(1.0, 1e7), st.floats(1.0, 100.0))
def test_more_load_lives_shorter_and_more_shots_leave_less(seed: int, more: float, shots: float, longer: float) -> None:
    stress: Floats = np.random.default_rng(seed).uniform(-200.0, 300.0, (4, 20))
    life = [damage(*padded([count_cycles(turning_points(x)) for x in closed(k * stress)]), sn()) for k in (1.0, more)]
    assert np.all(life[1] >= life[0] * (1.0 - 1e-9))
    few, many = (worst_fibres([candidates(stress, sn(), n)], n)[0].growth for n in (shots, shots * longer))
    assert many <= few * (1.0 + 1e-6)


@settings(max_examples=10, deadline=None)
@given(st.sampled_from(NAMES), st.floats(1.05, 2.0))
def test_a_machine_whose_loads_grow_lives_shorter(name: str, more: float) -> None:
    """The same sizes under grown loads, as no proportion steps in: factors fall as the loads grow, lives get no longer."""
    e = machine(name)
    wish = e.design.fatigue
    assert wish is not None
    for site in sites(context_of(e)):
        line = line_of(site, wish)
        before, after = worst_fibres(
            [candidates(k * site.stress, line, wish.shots) for k in (1.0, more)], wish.shots
        )  # fmt: skip
        assert after.growth == pytest.approx(before.growth / more, rel=1e-4)
        assert (after.life or np.inf) <= (before.life or np.inf) * (1.0 + 1e-9)


def test_the_mirror_image_lives_as_long() -> None:
    """About the x axis: the other rotation, the other wrap, the sheave's y and the exit the other way."""
    plain = machine("impact-rig")
    mirrored = machine(
        "impact-rig", mechanism__rotation='"cw"', sheave__wrap='"right"', sheave__center='["460 mm", "-30 mm"]',
        sheave__exit_angle='"90 deg"',
    )  # fmt: skip
    for one, other in zip(studied(plain).rows, studied(mirrored).rows, strict=True):
        assert other.factor == (None if one.factor is None else pytest.approx(one.factor, rel=1e-6)), (
            one.part,
            one.site,
        )


@pytest.mark.parametrize(
    "values",
    [
        {"disc__outer_diameter": '"130 mm"'}, {"link__width": '"17 mm"'}, {"crank_pin__diameter": '"45 mm"'},
        {"chain_end__width": '"4 mm"'}, {"link__thickness": '"60 mm"'}, {"fatigue__fillet_radius": '"40 mm"'},
    ],
)  # fmt: skip
def test_sizes_that_make_no_sense_still_have_a_life(values: dict[str, str]) -> None:
    e = machine("impact-rig", **values)
    assert all(r.factor is None or 0.0 < r.factor < np.inf for r in studied(e).rows)
    assert all(r.life is None or 0.0 <= r.life < np.inf for r in studied(e).rows)


def test_reliability_and_surface() -> None:
    """Asking for more parts that hold, or for a rougher surface, leaves a lower limit."""
    usual = row(machine("impact-rig"), "swing_link", "stop_flank")
    sure = row(machine("impact-rig", fatigue__reliability="0.9999"), "swing_link", "stop_flank")
    rough = row(machine("impact-rig", fatigue__surface='"as-cut"'), "swing_link", "stop_flank")
    assert sure.endurance_limit / usual.endurance_limit == pytest.approx(0.702 / 0.814, rel=2e-3)
    assert rough.endurance_limit < 0.9 * usual.endurance_limit


def test_by_hand() -> None:
    """S_e of the link, 770 MPa, hot-rolled, at 0.99: 57.7·770^−0.718 · k_b · 0.8139 · 385 MPa."""
    e = machine("impact-rig")
    link = e.sizes.link
    s_ut = link.material.ultimate_strength(link.thickness)
    d_e = 0.808 * (link.width * link.thickness) ** 0.5
    wanted = min(1.0, 57.7 * s_ut**-0.718) * 1.24 * d_e**-0.107 * 0.8139 * 0.5 * s_ut
    assert row(e, "swing_link", "stop_flank").endurance_limit == pytest.approx(wanted, rel=1e-4)


def test_a_chain_without_a_rating_says_so() -> None:
    found = row(machine("impact-rig"), "chain", "strand")
    assert found.factor is None
    assert "no rating" in found.note


def test_a_chain_with_the_maker_s_strength() -> None:
    """Straight on logarithmic paper from one pull to the dynamic strength at 3 × 10⁶."""
    e = machine("impact-rig", 3e6, fatigue__chain_dynamic_strength='"50 kN"')
    pull = float(e.past.state.tension.max()) * e.design.targets.shock_factor
    assert row(e, "chain", "strand").factor == pytest.approx(50e3 / pull)
    assert row(e, "chain", "strand").endless
    few = row(machine("impact-rig", 1.0, fatigue__chain_dynamic_strength='"50 kN"'), "chain", "strand")
    assert few.factor == pytest.approx(e.design.far_end.min_tensile_strength / pull)
    weak = row(machine("impact-rig", 2e4, fatigue__chain_dynamic_strength='"10 kN"'), "chain", "strand")
    assert weak.life is not None
    assert (weak.life >= 2e4) is ((weak.factor or 0.0) >= 1.0)


def test_the_suggestion_is_within_every_life() -> None:
    found = studied(machine("impact-rig"))
    lives = [r.life for r in found.rows if r.life is not None]
    assert found.inspect_after is not None
    assert found.inspect_after <= max(100.0, 0.1 * min(*lives, found.shots))


def test_a_thin_link_is_caught() -> None:
    thin = machine("impact-rig", 1e6, link__thickness='"6 mm"', link__width='"32 mm"')
    assert any(c.check == "fatigue" and c.part == "swing_link" and not c.holds for c in thin.checks)


def test_it_says_that_the_snatch_is_not_in_it() -> None:
    text = " ".join(machine("soil-tamper").cautions)
    assert module.RELEASE in text
