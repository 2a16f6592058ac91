"""What is bought, for the parts list."""

from __future__ import annotations

from dataclasses import dataclass

from parts.design import Design
from parts.quantities import show
from parts.sizes import Sizes
from parts.stack import Stack
from parts.stop_layout import bolt_engagement, floor_under_head


@dataclass(frozen=True, slots=True)
class Bought:
    key: str
    title: str
    quantity: int
    note: str


def bought(design: Design, sizes: Sizes, stack: Stack) -> list[Bought]:
    """Everything the machine needs that is not one of its made parts. Notes are in the design's units."""
    sides, disc, stop, far = len(stack.sides), sizes.disc, sizes.stop, design.far_end
    units = design.identity.units

    def size(value: float) -> str:
        return show(value, "length", units)

    own = f"the pin {far.pin_note}, diameter {size(sizes.chain_end.pin_diameter)}, locked"
    rows = []
    if far.over_sheave:
        slack = f"{size(far.slack)} longer than taut" if far.slack else "taut"
        what = f"{far.designation}{far.strands_note}; cut to be {slack} at the start dead centre"
        rows = [
            Bought(far.noun, far.noun.capitalize(), 1, what),
            Bought(
                f"{far.noun}_connecting_pin",
                f"Connecting pin of the {far.noun}",
                1,
                f"{own}; joins {far.noun} and chain end",
            ),
        ]
    else:
        rows = [Bought("output_pin", "Pin of the output", 1, f"{own}; joins {far.noun} and output")]
    rows += [
        Bought("hub_bolt", "Hub bolt", disc.bolt_count * sides, f"ISO 4762 {disc.bolt_thread}, head flush in the disc"),
    ]  # fmt: skip
    if stop.style == "block":
        long = floor_under_head(disc.thickness, stop.bolt_thread) + bolt_engagement(stop)
        rows += [
            Bought(
                "stop_dowel",
                "Dowel of the stop block",
                2 * sides,
                f"ISO 8734, diameter {stop.dowel_diameter:g} mm; {disc.thickness + 0.8 * stop.height:.0f} mm long or less",
            ),
            Bought(
                "stop_bolt",
                "Bolt of the stop block",
                2 * sides,
                f"ISO 4762 {stop.bolt_thread}, from the disc's back, head flush; {long:.1f} mm long under it, "
                "a longer one shortened",
            ),
        ]
    if stack.chain_pin_support == "cantilever":
        standard = "DIN 471" if units == "metric" else "external, inch series"
        ring = f"{standard}, for a shaft of {size(sizes.chain_pin.middle_diameter)}"
        rows.append(Bought("retaining_ring", "Retaining ring of the chain pin", 1, ring))
    if design.sheave is not None:
        what = f"pitch radius {size(design.sheave.pitch_radius)}, for {far.designation}, on its own pin"
        rows.append(Bought("sheave", "Sheave", 1, what))
    else:
        rows.append(Bought("output", "Output with its guide", 1, far.output_note(units)))
    return [
        *rows,
        Bought("spring", "Spring", 1, _spring(design)),
        Bought(
            "hub",
            "Hub and shaft",
            sides,
            f"to fit a bore of {size(disc.bore)}; nothing proud of the disc's chain face",
        ),
        Bought("motor", "Motor and drive", 1, "for the torque in the bill of loads; turns one way only"),
    ]


def _spring(design: Design) -> str:
    spring, units = design.spring, design.identity.units
    if spring.table is not None:
        force, draw = (
            show(float(spring.table[1, -1]), "force", units),
            show(float(spring.table[0, -1]), "length", units),
        )
        return f"force {force} at a draw of {draw}; see the design's table"
    return f"preload {show(spring.preload, 'force', units)}, rate {show(spring.rate, 'rate', units)}"
