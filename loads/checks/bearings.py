"""Main bearings and sheave bearing: static safety of rolling bearings, pressure and speed of plain bushes."""

from __future__ import annotations

import numpy as np

from loads.checks.context import Context, length_of
from loads.checks.shaft import shaft_load
from loads.practice import source, value
from loads.records import Check
from parts.design import Floats
from parts.sizes import BearingSizes

ISO_76 = "ISO 76:2006, static safety factor s0 = C0/P0"


def equivalent_static_load(radial: Floats, axial: Floats | float = 0.0, x_0: float = 0.6, y_0: float = 0.5) -> Floats:
    """P0 = max(X0 F_r + Y0 F_a, F_r) in N of a radial ball bearing; forces in N. Source: ISO 76:2006, 5.2.1."""
    return np.asarray(np.maximum(x_0 * np.asarray(radial) + y_0 * np.asarray(axial), radial))


def bush_pressure(force: Floats, d: float, width: float) -> Floats:
    """p = F/(d b) in MPa over the projected area of a plain bush; N, mm. Source: Shigley, boundary-lubricated bearings."""
    return np.asarray(force / (d * width))


def pressure_times_speed(pressure: Floats, speed: Floats | float, d: float) -> Floats:
    """p v in MPa·m/s; MPa, rad/s, mm. v = ω d/2. Source: Shigley, boundary-lubricated bearings."""
    return np.asarray(pressure * np.abs(speed) * d / 2000.0)


def bearing_checks(
    c: Context, part: str, site: str, bearing: BearingSizes, force: Floats, speed: Floats | None
) -> list[Check]:
    """One bearing under a radial force (N, n); ``speed`` (rad/s, n) where the design gives one."""
    if bearing.kind == "rolling":
        return [
            c.worst_check(
                part, site, "static safety", equivalent_static_load(force), bearing.static_rating, "N",
                value("rolling", "static_factor"), "s0 = C0/P0, no axial force", f"{ISO_76}; {source('rolling')}",
            )
        ]  # fmt: skip
    p = bush_pressure(force, bearing.diameter, bearing.width)
    slow = "" if speed is not None else "pv not covered: the design gives no [moving] disc_speed"
    rows = [
        c.worst_check(
            part, site, "bush pressure", p, value("plain", "pressure"), "MPa", 1.0, "F/(d b) over the projected area",
            source("plain"), slow,
        )
    ]  # fmt: skip
    if speed is not None:
        rows.append(
            c.worst_check(
                part, site, "bush pv", pressure_times_speed(p, speed, bearing.diameter), value("plain", "pv"), "MPa·m/s",
                1.0, "p v at the stated speed of the disc", source("plain"),
            )
        )  # fmt: skip
    return rows


def check(c: Context) -> list[Check]:
    """Both bearings of one main shaft; a sheave's goes with its far end."""
    run = c.running
    hub = c.site("main_bearing", "hub_face")
    load = shaft_load(hub.force, hub.moment, run.shaft.overhang, run.shaft.bearing_spacing)
    turning = c.design.moving.disc_speed if c.design.moving is not None else None
    disc = None if not turning else np.full_like(c.members.torque, turning)
    rows = []
    for site, force in (("first", load.first), ("second", load.second)):
        rows += bearing_checks(c, "main_bearing", site, run.main_bearing, length_of(force), disc)
    return rows
