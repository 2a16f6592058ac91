"""What the values of the tables that studies bring must be to one another; see ``parts.plausible``."""

from __future__ import annotations

from collections.abc import Iterator, Mapping

from parts.problems import Problem, written
from parts.schema import MechanismTable
from parts.schema_studies import DriveTable, TolerancesTable

ROUNDED = 1.01  # a free speed that was written down rounded
_ELECTRIC = ("torque_constant", "resistance")


def drive_problems(drive: DriveTable, raw: Mapping[str, object]) -> Iterator[Problem]:
    """One way of giving the motor, all of it; one way of giving the inertia."""
    electric = [key for key in _ELECTRIC if key in raw]
    if "stall_torque" in raw and electric:
        for key in electric:
            yield Problem(
                f"drive.{key}", None, written(raw[key]),
                "stall_torque and free_speed, or torque_constant, resistance and supply_voltage; not both",
                "the stall torque gives this already",
            )  # fmt: skip
    elif electric:
        for key in (*_ELECTRIC, "supply_voltage"):
            if key not in raw:
                yield Problem(f"drive.{key}", None, "nothing", f"{key}, since {electric[0]} is given", "missing")
    else:
        for key, other in (("stall_torque", "free_speed"), ("free_speed", "stall_torque")):
            if key in raw and other not in raw:
                yield Problem(f"drive.{other}", None, "nothing", f"{other}, since {key} is given", "missing")
    if "inertia" in raw and "rotor_inertia" in raw:
        yield Problem(
            "drive.rotor_inertia", None, written(raw["rotor_inertia"]),
            "inertia at the disc, or rotor_inertia at the motor; not both", "the inertia at the disc is given already",
        )  # fmt: skip
    if "encoder_on" in raw and "encoder_counts" not in raw:
        yield Problem("drive.encoder_counts", None, "nothing", "encoder_counts, since encoder_on is given", "missing")
    if drive.efficiency is not None and drive.backdriving_efficiency is not None:
        yield from _backdriving(drive.efficiency, drive.backdriving_efficiency)
    k, volts, free = drive.torque_constant, drive.supply_voltage, drive.free_speed
    if k is not None and volts is not None and free is not None:
        most = 1000.0 * volts / k  # 1 V·A is 1000 N·mm/s
        if free > most * ROUNDED:
            yield Problem(
                "drive.free_speed", None, f"{free:.5g} rad/s", f"{most:.5g} rad/s at most",
                "faster than supply_voltage over torque_constant allows",
            )  # fmt: skip


def _backdriving(efficiency: float, backwards: float) -> Iterator[Problem]:
    if backwards > efficiency:
        yield Problem(
            "drive.backdriving_efficiency", None, f"{backwards:g}", f"no more than efficiency, {efficiency:g}",
            "a gear loses no less when it is driven from its slow side",
        )  # fmt: skip


_OF_A_SHEAVE = ("sheave_x", "sheave_y", "chain_length", "worn_elongation")
_OF_A_TIE = ("tie_length", "output_x", "output_y")


def tolerance_problems(
    given: TolerancesTable, raw: Mapping[str, object], design: Mapping[str, object], mechanism: MechanismTable
) -> Iterator[Problem]:
    """Tolerances of what the design has, each small against what it is a tolerance of."""
    tie = design.get("tie") if isinstance(design.get("tie"), dict) else None
    foreign = _OF_A_SHEAVE if tie is not None else (*_OF_A_TIE, "arm", "draw_direction")
    what = "a tie has neither sheave nor chain" if tie is not None else "there is no [tie]"
    if isinstance(tie, dict):
        rocker = "pivot" in tie or "arm" in tie or tie.get("output") == "rocker"
        foreign = (*foreign, "draw_direction" if rocker else "arm")
    for key in foreign:
        if key in raw:
            text = what
            if tie is not None and key in ("arm", "draw_direction"):
                text = "the output is a rocker" if key == "draw_direction" else "the output is a slide"
            yield Problem(f"tolerances.{key}", None, written(raw[key]), f"a table without {key}", text)
    r, length = mechanism.crank_radius, mechanism.link_length
    if r is None or length is None or length <= r:
        return
    most = 0.1 * (length - r)
    for key in ("crank_radius", "link_length", "stop_position", "link_width"):
        value = getattr(given, key)
        if value is not None and value > most:
            yield Problem(
                f"tolerances.{key}", None, f"{value:.6g} mm",
                f"{most:.6g} mm at most, a tenth of what the link is longer than the crank radius",
                "too wide to be a tolerance",
            )  # fmt: skip
