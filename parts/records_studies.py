"""The records of the tables that studies bring, with their defaults; see ``parts.records``."""

from __future__ import annotations

from typing import Literal

from parts.design import Drive, Tolerances
from parts.far_ends.base import PRACTICE
from parts.records import Defaults
from parts.schema_studies import DriveTable, TolerancesTable

GEAR_EFFICIENCY = 0.8  # a gear of two or three stages; common practice, no source
TOLERANCES = (
    "crank_radius", "link_length", "stop_position", "link_width", "sheave_x", "sheave_y", "tie_length", "output_x",
    "output_y", "arm", "draw_direction", "chain_length", "worn_elongation", "encoder_offset", "backlash",
)  # fmt: skip


def tolerances(given: TolerancesTable, defaults: Defaults) -> Tolerances:
    """What is left out of the tolerances themselves goes by sizes and fits, so the study settles and lists it."""
    normal: Literal["normal", "uniform"] = "normal"
    return Tolerances(
        chance=defaults.take(
            "tolerances.chance", given.chance, 1e-4, "number", f"one machine in ten thousand, {PRACTICE}"
        ),
        samples=defaults.take("tolerances.samples", given.samples, 100_000, "count", "rounded up to a power of two"),
        seed=defaults.take("tolerances.seed", given.seed, 1, "count", "the same samples each time"),
        distribution=defaults.take(
            "tolerances.distribution", given.distribution, normal, "text",
            f"a tolerance is three standard deviations, {PRACTICE}; plays and the backlash are uniform",
        ),
        **{key: getattr(given, key) for key in TOLERANCES},
    )  # fmt: skip


def backdriven(efficiency: float) -> float:
    """Efficiency of a gear that is driven from its slow side: 2 − 1/η where it loses the same torque both ways, never
    below 0, where it locks itself. η is 0 to 1. Source: friction loss of screws and worms, from memory.

    >>> backdriven(0.8)
    0.75
    >>> backdriven(0.4)
    0.0
    """
    return max(0.0, 2.0 - 1.0 / efficiency) if efficiency > 0.0 else 0.0


def ideal_speed(voltage: float, torque_constant: float) -> float:
    """Free speed (rad/s) of a motor without losses of its own at a voltage (V), its constant in N·mm/A: ω = V/k, and
    1 V·A is 1000 N·mm/s. Source: back EMF of a DC motor, k_e = k_t.

    >>> ideal_speed(24.0, 50.0)
    480.0
    """
    return 1000.0 * voltage / torque_constant


def ideal_constant(voltage: float, free_speed: float) -> float:
    """Torque constant (N·mm/A) of a motor without losses of its own: the same equation the other way round."""
    return 1000.0 * voltage / free_speed


def drive(given: DriveTable, defaults: Defaults) -> Drive:
    """The motor by its stall torque and free speed, whichever way it was given."""
    k, r, volts = given.torque_constant, given.resistance, given.supply_voltage
    stall, free = given.stall_torque, given.free_speed
    lossless = "a motor without losses of its own"
    if k is not None and r is not None and volts is not None:
        stall = k * volts / r
        if free is None:
            free = defaults.take("drive.free_speed", None, ideal_speed(volts, k), "speed", lossless)
    elif k is None and volts is not None and free is not None:
        k = defaults.take("drive.torque_constant", None, ideal_constant(volts, free), "torque_constant", lossless)
    # what plays no part is not listed as assumed
    geared = Defaults() if stall is None and given.rotor_inertia is None and given.holding_torque is None else defaults
    reduction = geared.take(
        "drive.reduction", given.reduction, 1.0, "number", "no gear given: the motor turns the disc"
    )
    usual, why = (1.0, "no gear") if given.reduction is None else (GEAR_EFFICIENCY, f"a gear of two stages, {PRACTICE}")
    efficiency = geared.take("drive.efficiency", given.efficiency, usual, "number", why)
    inertia = given.inertia
    if inertia is None and given.rotor_inertia is not None:
        inertia = given.rotor_inertia * reduction**2
    on: Literal["disc", "motor"] = "disc"
    if given.encoder_counts is not None:
        on = defaults.take("drive.encoder_on", given.encoder_on, on, "text", "not said")
    return Drive(
        stall_torque=stall, free_speed=free, torque_constant=k, supply_voltage=volts, reduction=reduction,
        efficiency=efficiency,
        backdriving_efficiency=geared.take(
            "drive.backdriving_efficiency", given.backdriving_efficiency, backdriven(efficiency), "number",
            "the gear loses the same torque both ways, from memory: confirm with the maker",
        ),
        holding_torque=given.holding_torque, inertia=inertia, encoder_counts=given.encoder_counts, encoder_on=on,
        winding_time=given.winding_time,
    )  # fmt: skip
