"""Starters within wide walls, what their sweeps hold, and their poses."""

from __future__ import annotations

import math
from functools import lru_cache
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Any

import numpy as np
import shapely

from loads.backing_off import BackingOff
from loads.enclosure import EnclosureStudy
from loads.examine import Examination
from loads.linkage import state
from parts.sweeps import ARCS, OUT, Cover
from tests.starters import changed, examined

STARTERS = ("impact-rig", "seed-thrower", "soil-tamper")
WIDE = {"enclosure__above": "900", "enclosure__below": "900", "enclosure__behind": "900", "enclosure__ahead": "900"}
FREE = {"spring__most_draw": '"400 mm"'}
PARTS = ("crank_disc", "swing_link", "chain_end", "chain_pin", "stop")


@lru_cache(maxsize=64)
def of(text: str) -> Examination:
    with TemporaryDirectory() as folder:
        return examined(Path(folder), text)


def design(name: str, slack: float | None = None, **values: str) -> Examination:
    more = {} if slack is None else {"chain__slack": f'"{slack} mm"'}
    return of(changed(name, **{**FREE, **more, **(values or WIDE)}))


def study(e: Examination) -> EnclosureStudy:
    found = e.studies["enclosure"]
    assert isinstance(found, EnclosureStudy)
    return found


def backing(e: Examination) -> BackingOff:
    found = e.studies["backing_off"]
    assert isinstance(found, BackingOff)
    return found


def filled(found: EnclosureStudy, sweep: str) -> Any:
    """What the covers of a sweep hold, each core with its radius, without any simplifying."""

    def grown(cover: Cover) -> Any:
        return shapely.buffer(cover.cores, np.maximum(cover.radius, 1e-9) * OUT, quad_segs=ARCS)

    return shapely.union_all(np.concatenate([grown(cover) for cover in found.covers[sweep]]))


def inside(area: Any, placed: dict[str, Any]) -> bool:
    """Whether the outlines of the parts lie in an area, to rounding."""
    held = shapely.buffer(area, 1e-3)
    return all(bool(shapely.covers(held, placed[key])) for key in PARTS if key in placed)


def pose_of(e: Examination, theta: float) -> float:
    """λ of the machine while it winds."""
    s = state(e.machine, np.array([theta]), e.figures.events.catch)
    return float(s.link_direction[0]) - theta - math.pi
