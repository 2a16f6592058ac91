"""A small list of chains and materials, and a full design file, for the tests of the reader."""

from __future__ import annotations

from pathlib import Path

from parts.catalogue import Catalogue
from parts.design import Design, Material, Sheave
from parts.far_ends.chain import Chain
from parts.read import Reading, read_design


def chain_of(design: Design) -> Chain:
    """The chain of a design that has one."""
    assert isinstance(design.far_end, Chain)
    return design.far_end


def sheave_of(design: Design) -> Sheave:
    assert design.sheave is not None
    return design.sheave


def _roller(designation: str, strands: int, width: float, strength: float) -> dict[str, object]:
    return {
        "designation": designation,
        "kind": "roller",
        "pitch": 12.7,
        "width_over_pins": width,
        "plate_height": 11.8,
        "plate_thickness": 1.6,
        "pin_diameter": 4.45,
        "min_tensile_strength": strength,
        "inner_width": 7.75,
        "inner_link_width": 11.3,
        "strands": strands,
        "mass_per_metre": 0.7 * strands,
        "source": "a list",
        "confirmed": True,
    }


_LEAF: dict[str, object] = {
    "designation": "LH1644",
    "kind": "leaf",
    "pitch": 25.4,
    "width_over_pins": 33.5,
    "plate_height": 24.1,
    "plate_thickness": 4.0,
    "pin_diameter": 9.5,
    "min_tensile_strength": 169000,
    "lacing": [4, 4],
    "source": "a list",
    "confirmed": False,
}

CATALOGUE = Catalogue(
    chains={"LH1644": _LEAF, "08B-1": _roller("08B-1", 1, 17.0, 17800), "08B-2": _roller("08B-2", 2, 31.0, 31100)},
    materials={
        name: Material(
            name, "structural steel", 210_000, 0.3, 7850, ((16, f), (40, f - 10)), ((100, 470),), "a list", True
        )
        for name, f in (("S355J2", 355.0), ("S235JR", 235.0))
    },
)

FULL = """\
[design]
format = 1                     # of this file
title = "Guard-panel impact rig"
number = "PIR-100"
revision = "B"
units = "metric"

[mechanism]
stack = "twin"
rotation = "ccw"
crank_radius = "58 mm"
link_length = "86 mm"
seat_angle = "3 deg"
stop_reach = "74 mm"
hold_margin = "4 deg"

[sheave]
center = ["430 mm", "35 mm"]
pitch_radius = "48 mm"
wrap = "left"
exit_angle = "-90 deg"
efficiency = 0.97

[spring]
preload = "1.2 kN"
rate = "210 N/mm"
most_draw = "190 mm"

[chain]
designation = "LH1644"
strands = 1
slack = "0 mm"

[disc]
outer_diameter = "180 mm"
thickness = "20 mm"
bore = "40 mm"
bolt_circle = "70 mm"
bolt_count = 6
bolt_hole = "9 mm"
material = "S355J2"

[link]
width = "40 mm"
thickness = "15 mm"
material = "Spring plate"

[stop]
style = "post"
diameter = "25 mm"
height = "14 mm"

[crank_pin]
diameter = "25 mm"

[chain_pin]
diameter = "20 mm"

[chain_end]
width = "33 mm"

[clearances]
plate_gap = "1 mm"

[friction]
bearing = 0.1
bearing_radius = "30 mm"

[targets]
shock_factor = 1.25
load_share = 0.6
chain = 5
ultimate = 2.4
yield = 2.0

[enclosure]
outline = [[-200, -300], [600, -300], [600, 300], [-200, 300]]
obstacles = [
  [[300, 200], [350, 200], [350, 250]],
  [[-150, 200], [-100, 200], [-100, 250]],
]

[moving]
mass = "12 kg"
payload_mass = "3 kg"
payload_leaves_at = "20 mm"
bumper_stiffness = "800 N/mm"
bumper_travel = "25 mm"
gravity = 9.81
disc_speed = "20 rpm"

[materials."Spring plate"]
yield = "900 MPa"
ultimate = "1100 MPa"
youngs_modulus = "210 GPa"
density = "7850 kg/m3"
source = "the mill's certificate"
"""

LEAST = """\
[mechanism]
crank_radius = "58 mm"
link_length = "86 mm"
[sheave]
center = ["430 mm", "35 mm"]
[spring]
rate = 210
[chain]
designation = "LH1644"
"""


def read(folder: Path, text: str) -> Reading:
    path = folder / "rig.toml"
    path.write_text(text, encoding="utf-8")
    return read_design(path, CATALOGUE)


def line_of(text: str, needle: str) -> int:
    assert text.count(needle) == 1, f"{needle!r} is there {text.count(needle)} times"
    return text[: text.index(needle)].count("\n") + 1
