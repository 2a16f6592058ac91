"""The trigger study against closed forms of a far sheave, plain random sampling and first-order propagation."""

from __future__ import annotations

import math
from dataclasses import replace
from functools import lru_cache
from pathlib import Path
from statistics import NormalDist
from tempfile import TemporaryDirectory

import numpy as np
import pytest
from hypothesis import given, settings

from loads.cycle import events
from loads.examine import Examination
from loads.linkage import Linkage, state
from loads.spread import Nominal, first_events, outcome
from loads.tolerances import Cause, causes
from loads.trigger import ALL, LEAST_CHANCE, Tail, TriggerStudy, drawn
from parts.design import Floats
from tests.loads.far_end_designs import DESIGNS
from tests.loads.machines import machines as any_machine
from tests.starters import context_of, examined, text_of

R, L, D, BETA = 60.0, 90.0, 80.0, math.radians(3.0)
FAR = """
[mechanism]
crank_radius = "60 mm"
link_length = "90 mm"
stop_reach = "80 mm"
seat_angle = "3 deg"
[sheave]
center = ["10000000 mm", "0 mm"]
pitch_radius = "60 mm"
efficiency = 1
[spring]
rate = "20 N/mm"
[chain]
designation = "08B-1"
"""


@lru_cache(maxsize=32)
def machine(text: str, tolerances: str = "", more: str = "") -> Examination:
    with TemporaryDirectory() as folder:
        return examined(Path(folder), f"{text}\n[tolerances]\n{tolerances}\n{more}")


def study(e: Examination) -> TriggerStudy:
    found = e.studies["trigger"]
    assert isinstance(found, TriggerStudy)
    return found


def nominal(e: Examination) -> Nominal:
    m, at = e.machine, e.figures.events
    return Nominal(float(m.start_direction * m.turn), float(at.null), float(at.release), float(at.hold))


def off(e: Examination, n: int = 1, **values: Floats | float) -> dict[str, Floats]:
    return {key: np.zeros(n) + values.get(key, 0.0) for key in ALL}


def slope(e: Examination, key: str) -> float:
    return next(row.slope for row in study(e).effects if row.cause.key == key)


# ----------------------------------------------------------------------------------------------- far sheave, by hand


def test_slopes_of_a_far_sheave_by_hand() -> None:
    """Null where B lies on the line through O: 2π − atan2(L sin β, L cos β − r), differentiated by hand."""
    e = machine(FAR)
    square = L**2 + R**2 - 2.0 * L * R * math.cos(BETA)
    by_beta = (L**2 - L * R * math.cos(BETA)) / square
    wanted = {
        "stop_position": -by_beta / D,
        "link_width": -by_beta / D / 2.0,
        "crank_radius": -L * math.sin(BETA) / square,
        "link_length": R * math.sin(BETA) / square,
        "encoder_offset": -1.0,
        "backlash": -1.0,
    }
    for key, value in wanted.items():
        assert slope(e, key) == pytest.approx(value, rel=2e-3), key
    # and for small β the null is 2π − βL/s
    s = L - R
    assert slope(e, "stop_position") == pytest.approx(-L / s / D, rel=0.03)


def test_play_by_hand() -> None:
    """An eye shifted across by e, the contact where it was: B drawn out in the disc's frame, and the null where B, O and
    the far sheave are in line; for small β that is (1 − L/d)/s a millimetre."""

    def null(e: float) -> float:
        link = math.pi + BETA + e / D
        return -math.atan2(e + L * math.sin(link), R + L * math.cos(link)) % (2.0 * math.pi) + math.pi

    e = machine(FAR)
    by_hand = (null(1e-4) - null(-1e-4)) / 2e-4
    assert slope(e, "play_across") == pytest.approx(by_hand, rel=1e-3)
    assert slope(e, "play_across") == pytest.approx((1.0 - L / D) / (L - R), rel=0.05)
    assert slope(e, "play_along") == pytest.approx(-slope(e, "link_length"), rel=1e-3)


def test_chain_length_moves_the_draw_and_not_the_margin() -> None:
    e = machine(text_of("impact-rig"))
    base = outcome(e.design, nominal(e), off(e))
    longer = outcome(e.design, nominal(e), off(e, chain_length=2.0))
    assert longer.margin == pytest.approx(base.margin, abs=1e-12)
    assert base.draw[0] - longer.draw[0] == pytest.approx(2.0, abs=1e-9)


def test_the_drawing_itself() -> None:
    e = machine(text_of("impact-rig"))
    at = e.figures.events
    found = outcome(e.design, nominal(e), off(e))
    assert found.margin[0] == pytest.approx(e.design.mechanism.hold_margin, abs=1e-9)
    assert found.null[0] == pytest.approx(float(at.null), abs=1e-9)
    assert found.release[0] == pytest.approx(float(at.release), abs=1e-9)
    assert found.pull[0] == pytest.approx(float(e.figures.pull_at_hold), abs=1e-6)
    assert found.energy[0] == pytest.approx(float(e.figures.stored_energy), rel=1e-9)


@pytest.mark.parametrize("rotation", ["ccw", "cw"])
def test_a_sheave_that_goes_round_the_disc_takes_null_and_release_with_it(rotation: str) -> None:
    """Turned about the disc axis the whole machine is the same, but the encoder knows nothing of it."""
    text = text_of("impact-rig").replace('rotation = "ccw"', f'rotation = "{rotation}"')
    e = machine(text)
    assert e.design.sheave is not None
    x, y = e.design.sheave.center
    turned = 0.004
    c, s = math.cos(turned), math.sin(turned)
    moved = off(e, sheave_x=x * c - y * s - x, sheave_y=x * s + y * c - y)
    before, after = outcome(e.design, nominal(e), off(e)), outcome(e.design, nominal(e), moved)
    sense = 1.0 if rotation == "ccw" else -1.0
    assert after.margin[0] - before.margin[0] == pytest.approx(sense * turned, abs=1e-9)
    assert after.null[0] - before.null[0] == pytest.approx(sense * turned, abs=1e-9)


# ------------------------------------------------------------------------------------------------------- sampling


SMALL = "\n".join(
    [f"{key} = 0.02" for key in ("crank_radius", "link_length", "stop_position", "link_width", "sheave_x", "sheave_y")]
    + ['encoder_offset = "0.05 deg"', 'backlash = "0.05 deg"']
)


@pytest.mark.parametrize("name", ["impact-rig", "seed-thrower", "soil-tamper"])
@pytest.mark.parametrize("tolerances", ["", SMALL, f'{SMALL}\ndistribution = "uniform"'])
def test_first_order_agrees_with_the_samples(name: str, tolerances: str) -> None:
    found = study(machine(text_of(name), tolerances))
    assert found.margin.deviation == pytest.approx(found.first_order, rel=2e-3)
    assert sum(row.share for row in found.effects) == pytest.approx(1.0)
    assert [row.share for row in found.effects] == sorted((row.share for row in found.effects), reverse=True)


def test_where_null_and_release_change_places_first_order_does_not_hold() -> None:
    """With β = 0 both coincide, and the first of two that scatter comes sooner than either on average."""
    found = study(machine(text_of("impact-rig").replace('seat_angle = "3 deg"', 'seat_angle = "0 deg"')))
    assert found.margin.mean < min(found.null.mean, found.release.mean) - (2.0 * math.pi - found.hold_margin) * 0.999
    assert abs(found.margin.deviation / found.first_order - 1.0) > 0.02


def test_against_plain_random_machines_and_the_whole_search() -> None:
    """Pseudo-random samples, the whole search for events, state for the pull: nothing of the fast way."""
    e = machine(text_of("impact-rig"))
    found = study(e)
    n, rng = 6000, np.random.default_rng(7)
    r = e.design.mechanism.crank_radius + rng.normal(0.0, 0.1, n)
    link = e.design.mechanism.link_length + rng.normal(0.0, 0.1, n)
    d = e.design.mechanism.stop_reach
    beta = e.design.mechanism.seat_angle + (rng.normal(0.0, 0.1, n) + rng.normal(0.0, 0.1, n) / 2.0) / d
    assert e.design.sheave is not None
    x, y = (v + rng.normal(0.0, 0.8 / 3.0, n) for v in e.design.sheave.center)
    from loads.linkage import make_linkage

    many = make_linkage(
        crank_radius=r, link_length=link, seat_angle=beta, stop_reach=d, sheave_x=x, sheave_y=y,
        pitch_radius=e.design.sheave.pitch_radius, wrap=1.0, spring=e.machine.spring, efficiency=e.design.sheave.efficiency,
    )  # fmt: skip
    at = events(many)
    hold = float(e.figures.events.hold) + rng.normal(0.0, math.radians(0.5) / 3.0, n)
    hold = hold + rng.uniform(0.0, math.radians(0.5), n)
    hold = hold - (many.start_direction - float(e.machine.start_direction))
    margin = np.minimum(at.null, at.release) - hold
    assert found.margin.mean == pytest.approx(float(margin.mean()), abs=4.0 * found.margin.deviation / math.sqrt(n))
    assert found.margin.deviation == pytest.approx(float(margin.std()), rel=0.04)
    pull = state(many, hold[:, None], at.catch).pull[:, 0]
    assert found.pull.mean == pytest.approx(float(pull.mean()), abs=4.0 * found.pull.deviation / math.sqrt(n) + 0.03)
    assert found.pull.deviation == pytest.approx(float(pull.std()), rel=0.04)


def test_the_same_seed_gives_the_same_and_another_hardly_another() -> None:
    text = text_of("soil-tamper")
    one, again = study(machine(text, "samples = 4096")), study(machine(text, "samples = 4096\nseed = 1"))
    other = study(machine(text, "samples = 4096\nseed = 2"))
    assert one.margin == again.margin
    assert np.array_equal(one.shares, again.shares)
    assert one.margin != other.margin
    assert one.margin.mean == pytest.approx(other.margin.mean, abs=2e-3 * one.margin.deviation)
    assert one.margin.deviation == pytest.approx(other.margin.deviation, rel=0.01)


def test_samples_are_spread_as_they_say() -> None:
    found = (
        Cause("crank_radius", "", -0.3, 0.3, "length", "normal", True, ""),
        Cause("backlash", "", 0.0, 0.4, "angle", "uniform", True, ""),
    )
    values = drawn(found, 8192, 3)
    r, b = values["crank_radius"], values["backlash"]
    assert r.std() == pytest.approx(0.1, rel=5e-3)
    assert r.std() == pytest.approx(found[0].deviation, rel=5e-3)
    assert float(np.mean(np.abs(r) > 0.1)) == pytest.approx(0.3173, abs=2e-3)
    assert (b.min() >= 0.0, b.max() <= 0.4) == (True, True)
    assert b.std() == pytest.approx(0.4 / math.sqrt(12.0), rel=1e-3)
    assert b.std() == pytest.approx(found[1].deviation, rel=1e-3)
    assert abs(float(np.corrcoef(r, b)[0, 1])) < 0.01
    assert not values["link_length"].any()


@given(any_machine())
@settings(max_examples=60, deadline=None)
def test_events_beside_the_known_ones_are_those_of_the_whole_search(m: Linkage) -> None:
    at = events(m)
    if not (np.isfinite(at.null) and np.isfinite(at.release)):
        return
    some = replace(m.copies((3,)), seat_angle=np.asarray(m.seat_angle) + np.array([-0.01, 0.0, 0.01]))
    whole = events(some)
    null, release = first_events(some, float(at.null), float(at.release))
    good = np.isfinite(whole.null) & np.isfinite(whole.release)
    assert null[good] == pytest.approx(whole.null[good], abs=1e-8)
    assert release[good] == pytest.approx(whole.release[good], abs=1e-8)
    # and from a place where there is nothing
    null, release = first_events(some, float(at.null) - 2.0, float(at.release) - 2.0)
    assert null[good] == pytest.approx(whole.null[good], abs=1e-8)
    assert release[good] == pytest.approx(whole.release[good], abs=1e-8)


# -------------------------------------------------------------------------------------------------------- chances


def test_tail_of_a_normal_distribution() -> None:
    n = 1 << 17
    z = np.array([NormalDist().inv_cdf((i + 0.5) / n) for i in range(n)])
    tail = Tail(3.0 + 0.5 * z, 1e-3)
    for chance in (0.3, 0.01, 1e-3):  # counted
        assert tail.quantile(chance) == pytest.approx(3.0 + 0.5 * NormalDist().inv_cdf(chance), abs=1e-3)
    for chance in (5e-4, 1e-5, 1e-9):  # continued
        wanted = 3.0 + 0.5 * NormalDist().inv_cdf(chance)
        assert tail.quantile(chance) == pytest.approx(wanted, abs=5e-3)
        assert tail.chance(tail.quantile(chance)) == pytest.approx(chance, rel=1e-6)
    assert tail.chance(3.0 - 0.5 * 5.0) == pytest.approx(NormalDist().cdf(-5.0), rel=0.02)
    assert tail.chance(3.0) == pytest.approx(0.5, abs=1e-4)
    assert tail.chance(-100.0) == LEAST_CHANCE
    assert tail.chance(-1e9) > 0.0
    margins = np.linspace(-2.0, 5.0, 200)
    chances = [tail.chance(float(m)) for m in margins]
    assert chances == sorted(chances)


def test_no_spread_at_all() -> None:
    tail = Tail(np.full(1024, 0.07), 0.1)
    assert tail.chance(0.0) == LEAST_CHANCE
    assert tail.quantile(1e-6) == pytest.approx(0.07)


NOTHING = "\n".join(f"{key} = 0" for key in ALL if not key.startswith(("play", "tie", "output", "arm", "draw")))


def test_only_the_encoder() -> None:
    """4° held, an encoder that is out by ±6° (three standard deviations): one in 44 fires."""
    found = study(machine(text_of("impact-rig"), NOTHING.replace("encoder_offset = 0", 'encoder_offset = "6 deg"')))
    assert found.firing_chance == pytest.approx(NormalDist().cdf(-2.0), rel=0.01)
    assert found.counted == pytest.approx(found.samples * NormalDist().cdf(-2.0), rel=0.01)
    wanted = math.radians(2.0) * -NormalDist().inv_cdf(1e-4)
    assert found.margin_for_chance == pytest.approx(wanted, rel=0.01)
    (check,) = found.checks
    assert not check.holds
    assert check.safety_factor == pytest.approx(found.hold_margin / found.margin_for_chance)
    assert any("may fire as soon as it is held" in text for text in found.cautions)


@pytest.mark.parametrize("offset", [0.5, 3.2, 3.24, 6.0])
def test_check_and_chance_say_the_same(offset: float) -> None:
    e = machine(text_of("impact-rig"), NOTHING.replace("encoder_offset = 0", f'encoder_offset = "{offset} deg"'))
    found = study(e)
    (check,) = found.checks
    assert check.holds is (found.firing_chance <= found.chance * (1.0 + 1e-6))
    assert check in e.checks


def test_without_any_tolerance_the_margin_is_the_drawing_s() -> None:
    found = study(machine(text_of("impact-rig"), NOTHING))
    assert found.margin.mean == pytest.approx(found.hold_margin, abs=2e-4)
    assert found.margin.deviation < 2e-4  # the play of the crank pin is left
    assert found.firing_chance == LEAST_CHANCE
    assert found.at_least_resolved


def test_a_wider_tolerance_asks_for_a_larger_margin() -> None:
    needed = [study(machine(text_of("impact-rig"), f"stop_position = {t}")).margin_for_chance for t in (0.1, 0.3, 0.6)]
    assert needed == sorted(needed)
    less = study(machine(text_of("impact-rig"), "chance = 1e-7")).margin_for_chance
    assert less > needed[1]


# ------------------------------------------------------------------------------------------------- what is assumed


def test_what_was_assumed_is_listed_and_what_was_given_is_not() -> None:
    e = machine(text_of("impact-rig"), "crank_radius = 0.05")
    keys = [row.key for row in e.assumed if row.key.startswith("tolerances.")]
    assert "tolerances.crank_radius" not in keys
    assert {"tolerances.link_length", "tolerances.backlash", "tolerances.worn_elongation", "tolerances.chance"} <= set(
        keys
    )
    assert not any("play" in key for key in keys)
    assert len(keys) == len(set(keys))


def test_a_worn_chain_draws_less_and_fires_no_sooner() -> None:
    e = machine(text_of("soil-tamper"))
    found, chain = study(e), e.chain
    assert chain is not None
    assert found.worn_length == pytest.approx(chain.wear)
    assert found.worn_draw is not None
    assert found.draw.mean - found.worn_draw.mean == pytest.approx(chain.wear, rel=1e-6)
    assert found.worn_energy is not None
    # a weight of constant pull: energy goes with the draw
    assert found.energy.mean - found.worn_energy.mean == pytest.approx(590.0 * chain.wear, rel=1e-6)


def test_plays_are_those_of_the_fit() -> None:
    e = machine(text_of("impact-rig"))
    # H8/f7 at 16 mm: hole 0…27, shaft −34…−16 µm, so 16 to 61 µm of play
    found = {cause.key: cause for cause in causes(context_of(e), e.chain)}
    assert (found["play_along"].low, found["play_along"].high) == pytest.approx((0.008, 0.0305))
    assert (found["play_across"].low, found["play_across"].high) == pytest.approx((-0.0305, 0.0305))


@pytest.mark.parametrize("name", list(DESIGNS))
def test_every_far_end(name: str) -> None:
    e = machine(DESIGNS[name], "samples = 2048")
    found = study(e)
    keys = {row.cause.key for row in found.effects}
    of_a_tie = {"tie_length", "output_x", "output_y"}
    assert (of_a_tie <= keys) is (name in ("slide", "rocker"))
    assert ("arm" in keys, "draw_direction" in keys) == (name == "rocker", name == "slide")
    assert ("sheave_x" in keys) is (name in ("rope", "webbing"))
    assert found.margin.deviation == pytest.approx(found.first_order, rel=0.02)
    assert found.worn_draw is None  # none of them is taken off by its length
    base = outcome(e.design, nominal(e), off(e))
    assert base.margin[0] == pytest.approx(e.design.mechanism.hold_margin, abs=1e-8)


def test_no_study_without_its_table(tmp_path: Path) -> None:
    assert "trigger" not in examined(tmp_path, text_of("impact-rig")).studies
