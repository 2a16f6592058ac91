"""Sizes raised until every feature lives through the shots that the design asks for.

The feature of the shortest life has one size raised by a step, all others kept at least as they are, and so on. That
order knows nothing of how many shots are wanted: they only say where it ends, so that more of them never give a
smaller size.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace

from loads.checks import all_checks
from loads.checks.context import Context
from loads.far_ends.registry import behaviour
from loads.fatigue.study import FatigueRow, fatigue_study
from loads.members import History, members, site_histories
from loads.proportions.basis import round_up
from parts.clash import Findings
from parts.design import Assumed, Design
from parts.hardware import cap_screws, dowel_diameters, preferred
from parts.registry import make_parts
from parts.sizes import Sizes
from parts.stack import Stack

Settled = tuple[Sizes, Stack, tuple[Assumed, ...]]
Feature = tuple[str, str]

MOST_ROUNDS = 40
LEAST_STEP = 1.05  # of a size that has no list; common practice, no source
HELPS = 1.02  # least growth of a life that is worth a larger size

PINS, PLATES, SCREWS, DOWELS, CUT, RIM = "pins", "plates", "screws", "dowels", "cut", "rim"
SERIES: Mapping[str, str] = {
    "crank_pin.diameter": PINS,
    "chain_pin.diameter": PINS,
    "chain_pin.middle_diameter": PINS,
    "chain_end.pin_diameter": PINS,
    "stop.diameter": PINS,
    "shaft.diameter": PINS,
    "link.thickness": PLATES,
    "disc.thickness": PLATES,
    "disc.bolt_hole": SCREWS,
    "stop.bolt_hole": SCREWS,
    "stop.dowel_diameter": DOWELS,
    "link.width": CUT,
    "stop.width": CUT,
    "stop.length": CUT,
    "chain_end.height": CUT,
    "disc.outer_diameter": RIM,
}
# sizes that no key of the design file gives: the key beside which they are told of, and as what
BESIDE: Mapping[str, tuple[str, str]] = {
    "chain_pin.middle_diameter": ("chain_pin.diameter", "its middle "),
    "stop.dowel_diameter": ("stop.width", "its dowels "),
    "stop.bolt_hole": ("stop.width", "its bolts "),
}
# what each feature's life hangs on, what is tried first in front; by site, in front of it the part where that matters
GOVERNS: Mapping[str, tuple[str, ...]] = {
    "stop_flank": ("link.width", "link.thickness"),
    "crank_pin_eye": ("link.width", "link.thickness", "crank_pin.diameter"),
    "swing_link chain_pin_eye": ("link.width", "link.thickness", "chain_pin.diameter"),
    "chain_pin_eye": ("chain_end.height", "chain_pin.middle_diameter"),
    "crank_pin_hole": ("disc.thickness", "disc.outer_diameter", "crank_pin.diameter"),
    "stop_seat": ("disc.thickness", "disc.outer_diameter", "stop.diameter"),
    "crank_pin root": ("crank_pin.diameter",),
    "middle": ("chain_pin.middle_diameter",),
    "shoulder": ("chain_pin.diameter",),
    "link_seat": ("chain_pin.diameter",),
    "collar": ("chain_pin.middle_diameter",),
    "stop root": ("stop.diameter", "stop.width", "stop.length"),
    "bolts": ("stop.bolt_hole",),
    "dowels": ("stop.dowel_diameter",),
    "first_bearing": ("shaft.diameter",),
    "key": ("shaft.diameter",),
    "hub_face": ("disc.bolt_hole",),
    "hub_bolt_hole": ("disc.bolt_hole",),
}


def raised_for_life(design: Design, past: History, settle: Callable[[Mapping[str, float]], Settled]) -> Settled:
    """What ``settle`` gives without floors (mm, by key) under the sizes, or with those that the wanted shots need.

    A given size stays, and none is raised that lets another check fall short. Where no size helps, the feature is left
    as it is and its check says so.
    """
    settled = settle({})
    if design.fatigue is None:
        return settled
    state = _state(design, past, settled)
    left: set[Feature] = set()  # that nothing helps
    useless: set[tuple[Feature, str]] = set()
    raised: set[str] = set()
    rounds = 0
    while rounds < MOST_ROUNDS and (worst := state.worst(design.fatigue.shots, left)) is not None:
        for key, floors in _steps(design, state.settled, worst, useless):
            rounds += 1
            after = _state(design, past, settle(floors))
            if after.life(worst) > HELPS * state.life(worst) and not after.spoils(state):
                state = after
                raised.add(key)
                break
            useless.add((worst, key))
        else:
            left.add(worst)
    if not raised:
        return settled
    now = current(state.settled[0])
    alone = current(settle({key: now[key] for key in raised} | _kind(state.settled[0]))[0])
    kept = {key for key, size in alone.items() if size < now[key] - 1e-9} - raised - set(BESIDE)
    return _told(design, state.settled, raised, kept)


@dataclass(frozen=True, slots=True)
class _State:
    """What was settled, the shots that each feature lives through, and the margins of the checks that fall short."""

    settled: Settled
    lives: Mapping[Feature, float]
    short: Mapping[tuple[str, str, str], float]

    def spoils(self, before: _State) -> bool:
        """Whether a check but fatigue falls short that did not before, or by more."""
        return any(margin < before.short.get(row, 1.0) - 1e-3 for row, margin in self.short.items())

    def life(self, feature: Feature) -> float:
        """Endless for what another size has made away with."""
        return self.lives.get(feature, math.inf)

    def worst(self, shots: float, left: set[Feature]) -> Feature | None:
        """The feature of the shortest life, where that is less than ``shots``, but for those of ``left``."""
        short = {feature: life for feature, life in self.lives.items() if life < shots and feature not in left}
        return min(short, key=lambda feature: short[feature], default=None)


def _state(design: Design, past: History, settled: Settled) -> _State:
    """By the checks and the study of fatigue themselves, without the sweep for clashes, which takes longer than both."""
    sizes, stack, _ = settled
    sites = site_histories(past, stack, design.targets, sizes.disc.bolt_circle / 2.0, behaviour(design).sites)
    context = Context(
        design=design, sizes=sizes, stack=stack, parts=make_parts(design, sizes, stack), past=past,
        members=members(past, stack, design.targets), sites={(s.part, s.site): s for s in sites},
        findings=Findings((), (), (), ()),
    )  # fmt: skip
    study, checks = fatigue_study(context), all_checks(context)
    lives = {} if study is None else {(row.part, row.site): _life(row) for row in study.rows}
    return _State(settled, lives, {(row.part, row.site, row.check): row.margin for row in checks if not row.holds})


def _life(row: FatigueRow) -> float:
    """Endless without a life. Where the line gives none at all less than any other, and less the greater the stress."""
    if row.life is None:
        return math.inf
    return row.life if row.life > 0.0 else 1e-6 / row.amplitude


def _steps(
    design: Design, settled: Settled, feature: Feature, useless: set[tuple[Feature, str]]
) -> list[tuple[str, dict[str, float]]]:
    """The sizes that may be raised for a feature, each with the floors that raise it and keep the rest."""
    sizes, stack, _ = settled
    now = {key: size for key, size in current(sizes).items() if size > 0.0 and not _given(design, key)}
    part, site = feature
    keys = GOVERNS.get(f"{part} {site}", GOVERNS.get(site, ()))
    if part == design.far_end.part:
        keys = GOVERNS["chain_pin_eye"] if site == "chain_pin_eye" else ("chain_end.height", "chain_end.pin_diameter")
    elif part == "swing_link" and stack.chain_offset > 0.0:  # a couple tilts the pins: the eye's length bears it
        keys = ("link.thickness", *(key for key in keys if key != "link.thickness"))
    found = []
    for key in keys:
        step = None if key not in now or (feature, key) in useless else larger(design, key, now[key])
        if step is not None:
            found.append((key, now | {key: step}))
    return found


def current(sizes: Sizes) -> dict[str, float]:
    """The sizes that may be raised, mm; 0 where there is none of the kind."""
    z, stop, shaft = sizes, sizes.stop, sizes.running.shaft.diameter if sizes.running is not None else 0.0
    screws = {s.thread: s.clearance_hole for s in cap_screws()}
    return {
        "crank_pin.diameter": z.crank_pin.diameter, "chain_pin.diameter": z.chain_pin.diameter,
        "chain_pin.middle_diameter": z.chain_pin.middle_diameter, "chain_end.pin_diameter": z.chain_end.pin_diameter,
        "chain_end.height": z.chain_end.height, "link.width": z.link.width, "link.thickness": z.link.thickness,
        "disc.outer_diameter": z.disc.outer_diameter, "disc.thickness": z.disc.thickness,
        "disc.bolt_hole": screws[z.disc.bolt_thread], "shaft.diameter": shaft,
        "stop.diameter": stop.diameter, "stop.width": stop.width, "stop.length": stop.length,
        "stop.dowel_diameter": stop.dowel_diameter, "stop.bolt_hole": screws.get(stop.bolt_thread, 0.0),
    }  # fmt: skip


def _kind(sizes: Sizes) -> dict[str, float]:
    """The floor that keeps the kind of stop."""
    return {"stop.diameter": 1e-3} if sizes.stop.style == "post" else {"stop.dowel_diameter": 1e-3}


def _given(design: Design, key: str) -> bool:
    table, name = key.split(".")
    return getattr(getattr(design, table), name, None) is not None


def larger(design: Design, key: str, size: float) -> float | None:
    """The next size (mm) of a key's series; None beyond its end."""
    units = design.identity.units
    step = 25.4 / 16.0 if units == "us" else 1.0
    if SERIES[key] in (CUT, RIM):
        return round_up(LEAST_STEP * size, step if SERIES[key] == CUT else 5.0 * step)
    listed = {
        PINS: preferred("pin_diameters", units),
        PLATES: preferred("plate_thicknesses", units),
        SCREWS: tuple(s.clearance_hole for s in cap_screws()),
        DOWELS: dowel_diameters(),
    }[SERIES[key]]
    return next((x for x in listed if x > size + 1e-9), None)


def _told(design: Design, settled: Settled, raised: set[str], kept: set[str]) -> Settled:
    """With what was raised, and what was kept beside it, in the reason of each size."""
    assert design.fatigue is not None
    sizes, stack, rows = settled
    told = list(rows)
    for key in (key for keys in (kept, raised) for key in SERIES if key in keys):
        shown, what = BESIDE.get(key, (key, ""))
        if key == "chain_end.height" and design.far_end.part != "chain_end":
            shown = f"{design.far_end.part}.width"
        many = what.endswith("s ")
        why = f"{what}raised so that {'they live' if many else 'it lives'} through {design.fatigue.shots:g} shots"
        if key in kept:
            why = f"{what}no smaller than for fewer shots"
        at = next((i for i, row in enumerate(told) if row.key == shown), None)
        if at is not None:
            told[at] = replace(told[at], why=f"{told[at].why}; {why}")
        elif key in raised:
            told.append(Assumed(key, current(sizes)[key], "length", why))
    return sizes, stack, tuple(told)
