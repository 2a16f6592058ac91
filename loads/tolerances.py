"""What may differ from the drawing, by how much and how it is spread: the causes that the trigger study draws from.

Each is a number that is 0 in the machine as drawn. mm, rad.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Literal

from loads.chain_study import DISCARD, ChainStudy
from loads.checks.context import COMMON, Context
from parts import fits
from parts.design import Assumed
from parts.far_ends.tie import Rocker, Slide, Tie
from parts.tolerances import GENERAL, angle, general, share, source

Law = Literal["normal", "uniform"]
IN_SIGMAS = 3.0  # standard deviations that a tolerance is of a normal spread; common practice, no source


@dataclass(frozen=True, slots=True)
class Cause:
    """``low`` to ``high`` about 0; normal: centred, ``IN_SIGMAS`` standard deviations to each end; uniform: all between."""

    key: str
    title: str
    low: float
    high: float
    quantity: Literal["length", "angle"]
    law: Law
    given: bool
    why: str

    @property
    def mean(self) -> float:
        return 0.5 * (self.low + self.high)

    @property
    def deviation(self) -> float:
        """Standard deviation: (high − low)/6 of a normal spread within three, (high − low)/√12 of a uniform one."""
        span = self.high - self.low
        return span / (2.0 * IN_SIGMAS) if self.law == "normal" else span / math.sqrt(12.0)


def causes(c: Context, chain: ChainStudy | None) -> tuple[Cause, ...]:
    """Every cause of one design; a tolerance of 0 is left out. ``chain`` tells the lengths of what runs over a sheave."""
    found = (*_of_link_and_disc(c), *_of_far_end(c, chain), *_of_drive(c))
    return tuple(cause for cause in found if cause.high > cause.low)


def assumed(found: tuple[Cause, ...]) -> tuple[Assumed, ...]:
    """What was not given, as it is listed; plays come from fits, which are listed themselves."""
    return tuple(
        Assumed(f"tolerances.{x.key}", x.high if x.low == -x.high else x.high - x.low, x.quantity, x.why)
        for x in found
        if not x.given and not x.key.startswith("play_")
    )


def _both_ways(
    c: Context, key: str, title: str, usual: float, why: str, quantity: Literal["length", "angle"] = "length"
) -> Cause:
    wish = c.design.tolerances
    assert wish is not None
    given: float | None = getattr(wish, key)
    value = usual if given is None else given
    return Cause(key, title, -value, value, quantity, wish.distribution, given is not None, why)


def _machined(c: Context, key: str, title: str, nominal: float, of: str = "") -> Cause:
    return _both_ways(c, key, title, general(abs(nominal)), f"{GENERAL} for {of or title}")


def _of_link_and_disc(c: Context) -> Iterator[Cause]:
    m = c.design.mechanism
    yield _machined(c, "crank_radius", "crank pin position", m.crank_radius)
    yield _machined(c, "link_length", "link length", m.link_length)
    yield _machined(c, "stop_position", "stop across the link", m.stop_reach, "the stop's distance from the crank pin")
    yield _machined(c, "link_width", "link width", c.sizes.link.width)
    least, most = _clearance(c.sizes.fits.crank_pin_link, c.sizes.crank_pin.diameter)
    why = f"play of {c.sizes.fits.crank_pin_link} at {c.sizes.crank_pin.diameter:.4g} mm, ISO 286-2"
    yield Cause("play_across", "crank pin play, across the link", -most / 2, most / 2, "length", "uniform", False, why)
    # at the hold the link is a strut: the eye is pushed home by half of the play there is
    yield Cause("play_along", "crank pin play, along the link", least / 2, most / 2, "length", "uniform", False, why)


def _clearance(fit: str, diameter: float) -> tuple[float, float]:
    """Least and largest clearance (mm) of a fit, 0 where it is a press fit or beyond the tables."""
    if not fits.covers(diameter):
        return 0.0, 0.0
    least, most = fits.interference(fit, diameter)
    return max(0.0, -most), max(0.0, -least)


def _of_far_end(c: Context, chain: ChainStudy | None) -> Iterator[Cause]:
    far, sheave = c.design.far_end, c.design.sheave
    if sheave is not None:
        away = math.hypot(*sheave.center)
        yield _machined(c, "sheave_x", "sheave, in x", away, "the sheave's distance from the disc axis")
        yield _machined(c, "sheave_y", "sheave, in y", away, "the sheave's distance from the disc axis")
    elif isinstance(far, Tie):
        yield _machined(c, "tie_length", "tie length", far.length)
        place = far.output.point if isinstance(far.output, Slide) else far.output.pivot
        away = math.hypot(*place)
        yield _machined(c, "output_x", "output, in x", away, "the output's distance from the disc axis")
        yield _machined(c, "output_y", "output, in y", away, "the output's distance from the disc axis")
        if isinstance(far.output, Rocker):
            yield _machined(c, "arm", "rocker arm", far.output.arm)
        else:
            yield _both_ways(
                c,
                "draw_direction",
                "direction of the slide",
                angle("draw_direction"),
                source("draw_direction"),
                "angle",
            )
    if chain is not None:
        name = "cut_length" if far.grain is None else "chain_length"
        why = f"{share(name):.2%} of {_known(chain)}: {source(name)}"
        yield _both_ways(c, "chain_length", f"{far.noun} length", share(name) * known_length(chain), why)


def _of_drive(c: Context) -> Iterator[Cause]:
    wish = c.design.tolerances
    assert wish is not None
    yield _both_ways(c, "encoder_offset", "encoder offset", angle("encoder_offset"), source("encoder_offset"), "angle")
    play = angle("backlash") if wish.backlash is None else wish.backlash
    # the spring pushes the disc back against the drive; a jolt can bring it forwards by all of the backlash
    yield Cause(
        "backlash", "backlash, forwards", 0.0, play, "angle", "uniform", wish.backlash is not None, source("backlash")
    )


def known_length(chain: ChainStudy) -> float:
    """Length (mm) of the chain as far as it is known: all of it, or up to where it leaves the sheave."""
    return chain.up_to_sheave if chain.taut_length is None else chain.taut_length


def _known(chain: ChainStudy) -> str:
    return "its length up to the sheave" if chain.taut_length is None else "its length"


def worn(c: Context, chain: ChainStudy | None) -> tuple[float, Assumed | None]:
    """By how much (mm) a worn chain is longer, and what was assumed for it; 0 for what is cut to length, or a tie."""
    wish = c.design.tolerances
    assert wish is not None
    if chain is None or (wish.worn_elongation is None and c.design.far_end.grain is None):
        return 0.0, None
    if wish.worn_elongation is not None:
        return wish.worn_elongation * known_length(chain), None
    why = f"a chain is taken off at 3 %, {COMMON}"
    return DISCARD * known_length(chain), Assumed("tolerances.worn_elongation", DISCARD, "number", why)
