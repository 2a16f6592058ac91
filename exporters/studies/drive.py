"""The drive study as it leaves: a row of check.json, a section of the page, a line of the summary."""

from __future__ import annotations

import math
from typing import Any

from exporters.check_json import Row, degrees, tidy
from exporters.shown import Shown, angle, figures
from exporters.studies.leaving import Leaving
from loads.drive import Demands, Disc, Driven, DriveStudy, at_hold
from loads.examine import Examination
from loads.practice import value
from parts.design import Drive

Facts = list[tuple[str, str]]
UNKNOWN = "not known"


def _scaled(value: float | None, scale: float = 1.0) -> float | None:
    return None if value is None else tidy(value * scale)


def rpm(speed: float) -> float:
    """rad/s in turns a minute."""
    return speed * 60.0 / math.tau


def drive_row(e: Examination, study: DriveStudy) -> Row:
    """Torques in N·m, energies in J, powers in W, charge in coulomb; null where the design does not tell, or it stalls."""
    d, drive, disc = study.driven, study.drive, study.disc
    return {
        "wind_time_s": None if d is None else _scaled(d.time),
        "peak_motor_torque_Nm": None if d is None else _scaled(d.peak, 1e-3),
        "energy_a_shot_J": None if d is None else _scaled(d.energy),
        "starts_anywhere": None if d is None else d.starts_anywhere,
        "unloads_backwards": None if d is None else d.unloads,
        "mean_motor_torque_Nm": None if d is None else _scaled(d.mean, 1e-3),
        "starting_motor_torque_Nm": None if d is None else _scaled(d.start, 1e-3),
        "stall_torque_Nm": None if d is None else _scaled(d.stall, 1e-3),
        "peak_motor_power_W": None if d is None else _scaled(d.peak_power, 1e-3),
        "mean_motor_power_W": None if d is None else _scaled(d.mean_power, 1e-3),
        "motor_shaft_energy_J": None if d is None else _scaled(d.shaft_energy, 1e-3),
        "peak_current_A": None if d is None else _scaled(d.peak_current),
        "charge_a_shot_C": None if d is None else _scaled(d.charge),
        "unloading_brakes_motor_by_Nm": None if d is None else _scaled(d.back_brake, 1e-3),
        "hold_at_motor_Nm": None if drive is None else _scaled(at_hold(disc, drive), 1e-3),
        "hold_current_A": None if d is None else _scaled(d.hold_current),
        "hold_power_W": None if d is None else _scaled(d.hold_power),
        "inertia_at_disc_kgm2": None if drive is None else _scaled(drive.inertia, 1e-6),
        "counts_a_turn_needed": tidy(study.counts),
        "counts_a_turn": _scaled(study.counts_there),
        "at_disc": _disc_row(disc),
        "demands": None if study.demands is None else _demands_row(study.demands),
    }


def _disc_row(disc: Disc) -> Row:
    return {
        "peak_torque_Nm": tidy(disc.peak / 1000.0), "peak_at_deg": degrees(disc.peak_at),
        "peak_torque_with_shock_Nm": tidy(disc.peak_with_shock / 1000.0), "mean_torque_Nm": tidy(disc.mean / 1000.0),
        "starting_torque_Nm": tidy(disc.start / 1000.0), "starting_at_deg": degrees(disc.start_at),
        "least_torque_Nm": tidy(disc.least / 1000.0), "hold_torque_Nm": tidy(disc.hold / 1000.0),
        "energy_J": tidy(disc.energy / 1000.0), "unloading_drives_Nm": tidy(disc.back_drive / 1000.0),
        "unloading_brakes_Nm": tidy(disc.back_brake / 1000.0),
    }  # fmt: skip


def _demands_row(d: Demands) -> Row:
    return {
        "winding_time_s": tidy(d.time), "mean_speed_rpm": tidy(rpm(d.speed)), "peak_power_W": tidy(d.peak_power / 1000.0),
        "mean_power_W": tidy(d.mean_power / 1000.0), "stall_torque_after_gear_Nm": tidy(d.stall / 1000.0),
        "free_speed_after_gear_rpm": tidy(rpm(d.free)), "largest_motor_power_W": tidy(d.largest_power / 1000.0),
    }  # fmt: skip


def drive_line(e: Examination, study: DriveStudy) -> str:
    """How the motor does, or what to look for."""
    shown, d = Shown(e.design.identity.units), study.driven
    if d is not None:
        if d.time is None:
            return (
                f"Drive: the motor stalls: the winding asks for {shown.quantity(d.peak, 'torque')} at its shaft, its stall "
                f"torque is {shown.quantity(d.stall, 'torque')}."
            )
        energy = "" if d.energy is None else f", {figures(d.energy)} J from the supply a shot"
        back = "can" if d.unloads else "can not"
        return (
            f"Drive: wound in {figures(d.time, 3)} s, {shown.quantity(d.peak, 'torque')} at the motor at most{energy}; it "
            f"{'starts from every angle' if d.starts_anywhere else 'does not start from every angle'} and {back} let the "
            "machine down backwards."
        )
    if study.demands is None:
        return ""
    want = study.demands
    return (
        f"Drive: to wind in {figures(want.time, 3)} s look for a motor with stall torque × reduction × gear efficiency of "
        f"{shown.quantity(want.stall, 'torque', 3)} or more and free speed / reduction of {figures(rpm(want.free), 3)} rpm "
        f"or more, {figures(want.largest_power / 1000.0, 3)} W at its best; it holds "
        f"{shown.quantity(study.disc.hold, 'torque', 3)} at the disc."
    )


def drive_values(e: Examination, study: DriveStudy) -> dict[str, Any]:
    """What the page's section says."""
    shown = Shown(e.design.identity.units)
    share = 100.0 * value("motor", "count_share")
    return {
        "disc": _disc_facts(study.disc, shown),
        "demands": None if study.demands is None else _demand_facts(study.demands, shown),
        "assumed_time": bool(study.assumed),
        "margin": f"{value('motor', 'stall_margin'):g}",
        "motor": None
        if study.driven is None or study.drive is None
        else _motor_facts(study.driven, study.drive, study.disc, shown),
        "encoder": f"{figures(math.ceil(study.counts - 1e-6))} counts a turn of the disc or more, so that one count is at "
        f"most {share:g} % of the hold margin"
        + ("" if study.counts_there is None else f"; it has {figures(study.counts_there)}"),
    }


def _disc_facts(disc: Disc, shown: Shown) -> Facts:
    def torque(value: float) -> str:
        return shown.quantity(value, "torque")

    return [
        ("Peak torque, winding", f"{torque(disc.peak)} at {angle(disc.peak_at)}°"),
        ("The same with the shock factor, for gear and shaft", torque(disc.peak_with_shock)),
        ("To start from a standstill, at the worst angle", f"{torque(disc.start)} at {angle(disc.start_at)}°"),
        ("Mean torque, winding", torque(disc.mean)),
        ("Work a shot", shown.quantity(disc.energy, "energy")),
        ("Torque at the hold, without friction", torque(disc.hold)),
        ("Backwards, unloading: largest that it gives back", torque(disc.back_brake)),
        ("Backwards, unloading: largest that it asks for", torque(disc.back_drive)),
    ]


def _demand_facts(d: Demands, shown: Shown) -> Facts:
    return [
        ("Winding time", f"{figures(d.time, 3)} s"),
        ("Mean speed of the disc", f"{figures(rpm(d.speed))} rpm"),
        ("Peak power at that speed", f"{figures(d.peak_power / 1000.0)} W"),
        ("Mean power", f"{figures(d.mean_power / 1000.0)} W"),
        ("Stall torque × reduction × gear efficiency, at least", shown.quantity(d.stall, "torque")),
        ("Free speed / reduction, at least", f"{figures(rpm(d.free))} rpm"),
        ("Largest power of such a motor, after the gear", f"{figures(d.largest_power / 1000.0)} W"),
    ]


def _motor_facts(d: Driven, drive: Drive, disc: Disc, shown: Shown) -> Facts:
    def told(value: float | None, unit: str, scale: float = 1.0) -> str:
        return UNKNOWN if value is None else f"{figures(value * scale)} {unit}"

    stalls = "it stalls" if d.time is None else ""
    hold = shown.quantity(at_hold(disc, drive), "torque")
    locks = "; the gear locks itself" if drive.backdriving_efficiency == 0.0 else ""
    return [
        ("Time to wind", stalls or told(d.time, "s")),
        ("Torque at the motor, peak", f"{shown.quantity(d.peak, 'torque')} of {shown.quantity(d.stall, 'torque')} at stall"),
        ("Torque at the motor, mean", shown.quantity(d.mean, "torque")),
        ("Torque at the motor to start, at the worst angle", shown.quantity(d.start, "torque")),
        ("Power at the motor's shaft, peak", stalls or told(d.peak_power, "W", 1e-3)),
        ("Power at the motor's shaft, mean", stalls or told(d.mean_power, "W", 1e-3)),
        ("Current, peak", told(d.peak_current, "A")),
        ("Charge a shot", stalls or told(d.charge, "A·s")),
        ("Energy a shot, from the supply", stalls or told(d.energy, "J")),
        ("Starts from every angle", "yes" if d.starts_anywhere else "no"),
        ("Lets the machine down backwards under control", "yes" if d.unloads else "no"),
        ("Torque at the motor at the hold", hold + locks),
        ("Current and power at the hold", _holding(d, drive)),
    ]  # fmt: skip


def _holding(d: Driven, drive: Drive) -> str:
    if drive.holding_torque is not None:
        return "none: a brake holds"
    if d.hold_current is None:
        return UNKNOWN
    power = "" if d.hold_power is None else f", {figures(d.hold_power)} W"
    return f"{figures(d.hold_current)} A{power}"


LEAVING = Leaving("The drive", drive_row, drive_values, drive_line)
