"""Many machines at once, each a little off its drawing: where they fire, what they draw, where the disc really stands.

Only what a shot hangs on is worked out (null, release, and one pose at the hold), so that a hundred thousand machines
take about a second. mm, rad, N·mm.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, fields, replace
from typing import cast

import numpy as np

from loads.cycle import events
from loads.far_ends.registry import linkage_of
from loads.linkage import Linkage, chain_line, lift, seated_chain_pin_at, seated_line
from loads.roots import bracketed_root
from loads.spring_law import spring_energy
from loads.studies.progress import step
from parts.design import Design, Floats
from parts.far_ends.tie import Rocker, Slide, Tie

CHUNK = 8192  # machines in work at once: they stay in the processor's cache
WINDOW = 0.35  # rad each side of the drawing's event in which a machine's is looked for first


@dataclass(frozen=True, slots=True)
class Nominal:
    """The machine as drawn: angles that the encoder is set by."""

    start: float  # machine frame, turned so that the disc's rotation is positive
    null: float
    release: float
    hold: float


@dataclass(frozen=True, slots=True)
class Outcome:
    """One element a machine. Crank angles count from where the drawing has the start dead centre."""

    margin: Floats  # from where the disc really is to the first of null and release; below 0 it has fired
    null: Floats
    release: Floats
    pull: Floats  # where the disc really is
    draw: Floats
    energy: Floats


def _number(value: Floats | float) -> float:
    """An array where a record has a number: the mechanics take either."""
    return cast("float", value)


def machines(design: Design, d: Mapping[str, Floats]) -> tuple[Linkage, Floats]:
    """Machines off their drawing by the causes ``d`` (see ``loads.tolerances``), and by what their crank pin's direction
    is ahead of the disc's.

    The link turns about the middle of its eye, which play shifts by ``play_across`` and ``play_along``, and lies on the
    stop at ``stop_reach`` d. Shifted across by e the eye is seen from the disc axis at e/r ahead; the contact does not
    move, so the link turns by e/d; a stop or half a link's width that is δ thicker turns it by δ/d. Hence
    β′ = β + (δ + e)/d − e/r. The eye that is pushed home shortens the link by ``play_along``. Source: geometry, first
    order in play and tolerance.
    """
    m, far = design.mechanism, design.far_end
    across = d["play_across"]
    ahead = across / m.crank_radius
    turned = (d["stop_position"] + d["link_width"] / 2.0 + across) / m.stop_reach
    mechanism = replace(
        m,
        crank_radius=_number(m.crank_radius + d["crank_radius"]),
        link_length=_number(m.link_length + d["link_length"] - d["play_along"]),
        seat_angle=_number(m.seat_angle + turned - ahead),
    )
    sheave = design.sheave
    if sheave is not None:
        x, y = sheave.center
        sheave = replace(sheave, center=(_number(x + d["sheave_x"]), _number(y + d["sheave_y"])))
        far = replace(far, slack=_number(far.slack + d["chain_length"]))
    elif isinstance(far, Tie):
        out: Slide | Rocker
        if isinstance(far.output, Slide):
            x, y = far.output.point
            at = (_number(x + d["output_x"]), _number(y + d["output_y"]))
            out = replace(far.output, point=at, direction=_number(far.output.direction + d["draw_direction"]))
        else:
            x, y = far.output.pivot
            at = (_number(x + d["output_x"]), _number(y + d["output_y"]))
            out = replace(far.output, pivot=at, arm=_number(far.output.arm + d["arm"]))
        far = replace(far, length=_number(far.length + d["tie_length"]), output=out)
    return linkage_of(replace(design, mechanism=mechanism, sheave=sheave, far_end=far)), ahead


def first_events(machine: Linkage, null: float, release: float) -> tuple[Floats, Floats]:
    """Null and release of machines (n) that are near one whose events are known (rad).

    The same roots as those of ``loads.cycle.events``, looked for beside the known ones; a machine that has none there
    gets the whole search.
    """
    shape = machine.shape

    def arm(theta: Floats) -> Floats:
        return seated_line(machine, theta).arm

    def hold_on(theta: Floats) -> Floats:
        return lift(machine, seated_line(machine, theta), theta)

    with np.errstate(invalid="ignore"):
        first, second = _beside(arm, shape, null), _beside(hold_on, shape, release)
        lost = np.flatnonzero(~(np.isfinite(first) & np.isfinite(second)))
        if lost.size:
            some = events(_picked(machine, lost))
            first[lost], second[lost] = some.null, some.release
    return first, second


def _beside(function: Callable[[Floats], Floats], shape: tuple[int, ...], near: float) -> Floats:
    """Where functions go from above zero to below within ``WINDOW`` of a place, NaN where they do not."""
    low, high = np.full(shape, near - WINDOW), np.full(shape, near + WINDOW)
    crosses = (function(low) > 0.0) & (function(high) <= 0.0)
    return bracketed_root(function, np.where(crosses, low, np.nan), high, tolerance=1e-11)


def _picked(machine: Linkage, rows: np.ndarray[tuple[int, ...], np.dtype[np.intp]]) -> Linkage:
    """Some of many machines by their number; a chunk takes whatever picks from an array."""
    return machine.chunk(cast("slice", rows))


def outcome(design: Design, nominal: Nominal, d: Mapping[str, Floats]) -> Outcome:
    """What machines off their drawing do, a chunk at a time; ``d`` has one array (n) a cause."""
    n = len(next(iter(d.values())))
    starts = range(0, n, CHUNK)
    parts = []
    for i, first in enumerate(starts):
        step("tolerances", i, len(starts))
        parts.append(_outcome(design, nominal, {key: value[first : first + CHUNK] for key, value in d.items()}))
    return Outcome(*(np.concatenate([getattr(part, f.name) for part in parts]) for f in fields(Outcome)))


def _outcome(design: Design, nominal: Nominal, d: Mapping[str, Floats]) -> Outcome:
    machine, ahead = machines(design, d)
    null, release = first_events(machine, nominal.null, nominal.release)
    # the encoder knows the machine frame: what turns the chain line turns the events under it
    shift = np.mod(machine.start_direction * machine.turn - nominal.start + np.pi, 2.0 * np.pi) - np.pi - ahead
    stands = nominal.hold + d["encoder_offset"] + d["backlash"]
    theta = stands - shift
    line = chain_line(machine, *seated_chain_pin_at(machine, theta))
    # a link that hangs in tension at the start is longer by the play that shortens it at the hold
    pull = line.pull + (2.0 * d["play_along"] if design.far_end.over_sheave else 0.0)
    draw = np.maximum(pull - machine.slack, 0.0)
    return Outcome(
        margin=np.minimum(null, release) - theta, null=null + shift, release=release + shift, pull=pull, draw=draw,
        energy=spring_energy(machine.spring, draw),
    )  # fmt: skip
