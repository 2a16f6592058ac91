"""What a kind of far end does: how it moves, what it loads, what is checked of it. One record, one interface."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import TYPE_CHECKING

from loads.cycle import Cycle
from loads.linkage import Linkage
from loads.records import FarSite
from parts.design import Design, Floats, Material
from parts.problems import Problem

if TYPE_CHECKING:
    from loads.checks.context import Context
    from loads.records import Check


# use of a plate (mm thick) over its widths (n), of a steel under a pull over crank angle
PlateUse = Callable[[Design, float, Floats, Material, Floats], Floats]


@dataclass(frozen=True)
class Behaviour:
    linkage: Callable[[Design], Linkage]
    sites: tuple[FarSite, ...]  # what of it carries load, in the machine frame
    problems: Callable[[Design, Cycle], Iterator[Problem]]  # of a mechanism that cannot exist
    checks: Callable[[Context], list[Check]]
    plate_use: PlateUse | None = None  # where the plate on the chain pin is itself the far end
