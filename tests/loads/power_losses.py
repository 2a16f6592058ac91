"""Machines that lose their power: far sheaves with friction, their bands and their fates."""

from __future__ import annotations

import math
from dataclasses import replace
from pathlib import Path

import numpy as np

from loads.cycle import cycle
from loads.inertia import Inertia
from loads.linkage import Linkage
from loads.power_loss.bands import Outcome, outcomes
from loads.power_loss.coast import make_path
from loads.power_loss.seat import (
    trade,
    with_seat,
)
from loads.power_loss.study import Band, PowerLoss, make_bands
from tests.loads.machines import FAR, linear, machine
from tests.starters import examined

DEG = math.pi / 180.0
ROD = Inertia(disc=30_000.0, link_mass=0.0, link_middle=0.0, link=0.0)


def rubbing(m: Linkage, bearing: float, crank_pin: float, chain_pin: float) -> Linkage:
    return replace(
        m, friction_bearing=np.asarray(bearing), friction_crank_pin=np.asarray(crank_pin),
        friction_chain_pin=np.asarray(chain_pin),
    )  # fmt: skip


def far(beta: float, *friction: float) -> Linkage:
    """r = 60, L = 90, s = 30, nearly parallel chain."""
    return rubbing(machine(60, 90, 80, beta, FAR, 0, 1, linear(0, 100)), *(friction or (0.0, 0.0, 0.0)))


def outcome_of(m: Linkage) -> Outcome:
    found = outcomes(with_seat(m, np.array([float(m.seat_angle)])))[1][0]
    assert found is not None
    return found


def fates(m: Linkage) -> list[str]:
    return [s.fate for s in outcome_of(m).stretches]


def study_of(folder: Path, text: str) -> PowerLoss:
    found = examined(folder, text).studies["power_loss"]
    assert isinstance(found, PowerLoss)
    return found


def bands_of(m: Linkage) -> tuple[Band, ...]:
    f = cycle(m)
    row = next(r for r in trade(m, {"as designed": float(m.seat_angle)}) if r.marks)
    return make_bands(m, f.events, make_path(m, f, ROD, 2.0 * math.pi - 1.0, row.outcome.release), row)
