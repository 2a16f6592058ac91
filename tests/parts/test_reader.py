"""Good design files: what comes out, what is assumed, which line a key has, and what the digest depends on."""

from __future__ import annotations

import math
from pathlib import Path

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from parts.design import Design
from parts.quantities import show
from parts.read import read_design
from tests.parts.designs import CATALOGUE, FULL, LEAST, chain_of, line_of, read, sheave_of


def good(folder: Path, text: str) -> Design:
    reading = read(folder, text)
    assert reading.problems == ()
    assert reading.design is not None
    return reading.design


def test_full(tmp_path: Path) -> None:
    design = good(tmp_path, FULL)
    assert (design.identity.number, design.identity.revision) == ("PIR-100", "B")
    assert design.mechanism.seat_angle == math.radians(3)
    assert sheave_of(design).center == (430.0, 35.0)
    assert sheave_of(design).exit_angle == pytest.approx(-math.pi / 2)
    assert (design.spring.preload, design.spring.rate, design.spring.most_draw) == (1200.0, 210.0, 190.0)
    chain = chain_of(design)
    assert (chain.min_tensile_strength, chain.lacing, chain.tongue_width) == (169_000, (4, 4), 4.0)
    assert chain.confirmed is False
    assert design.disc.material is not None
    assert design.disc.material.yield_strength(20) == 345
    assert design.link.material is not None
    assert design.link.material.yields == ((math.inf, 900.0),)
    assert design.link.material is design.own_materials[0]
    assert design.enclosure is not None
    assert design.enclosure.outline is not None
    assert design.enclosure.outline.shape == (4, 2)
    assert len(design.enclosure.obstacles) == 2
    assert design.moving is not None
    assert design.moving.gravity == pytest.approx(9810)
    assert design.moving.disc_speed == pytest.approx(20 * math.tau / 60)
    assert [a.key for a in design.assumed] == [
        "mechanism.reverse",
        "friction.crank_pin",
        "friction.chain_pin",
        'materials."Spring plate".poissons_ratio',
    ]


def test_least(tmp_path: Path) -> None:
    design = good(tmp_path, LEAST)
    assumed = {a.key: show(a.value, a.quantity, "metric") for a in design.assumed}
    assert assumed == {
        "design.title": "Untitled over-centre draw",
        "design.number": "DC-1",
        "design.revision": "A",
        "design.units": "metric",
        "mechanism.stack": "twin",
        "mechanism.rotation": "ccw",
        "mechanism.seat_angle": "3 deg",
        "mechanism.stop_reach": "73.4 mm",
        "mechanism.hold_margin": "4 deg",
        "mechanism.reverse": "forbidden",
        "sheave.pitch_radius": "63.5 mm",
        "sheave.wrap": "left",
        "sheave.exit_angle": "half a wrap",
        "sheave.efficiency": "0.97",
        "spring.preload": "0 N",
        "chain.strands": "1",
        "chain.slack": "0 mm",
        "friction.bearing": "0.1",
        "friction.crank_pin": "0.12",
        "friction.chain_pin": "0.15",
        "targets.shock_factor": "1.25",
        "targets.load_share": "0.6",
        "targets.chain": "5",
        "targets.ultimate": "2.4",
        "targets.yield": "2",
    }
    assert all(a.why for a in design.assumed)
    assert (design.disc.bore, design.plate_gap, design.enclosure, design.moving) == (None, None, None, None)


def test_bare_numbers_and_us_units_give_the_same_machine(tmp_path: Path) -> None:
    bare = LEAST.replace('"58 mm"', "58").replace('"430 mm"', "430.0")
    assert good(tmp_path, bare) == good(tmp_path, LEAST)
    inches = good(tmp_path, LEAST.replace('"58 mm"', f'"{58 / 25.4!r} in"'))
    assert inches.mechanism.crank_radius == pytest.approx(58, rel=1e-14)


@pytest.mark.parametrize(
    ("lines", "designation", "strands", "tongue"),
    [
        ('designation = "LH1644"', "LH1644", 1, 4.0),
        ('designation = "08B"', "08B-1", 1, 10.7),
        ('designation = "08B"\nstrands = 2', "08B-2", 2, 10.7),
        ('designation = "08B-1"\nstrands = 2', "08B-2", 2, 10.7),
        ('designation = "08B-2"', "08B-2", 2, 10.7),
        ('designation = "08B-1"\ninner_link_width = 10', "08B-1", 1, 9.5),
        ('designation = "08B-1"\ninner_width = 7', "08B-1", 1, 9.6),
    ],
)
def test_listed_chains(tmp_path: Path, lines: str, designation: str, strands: int, tongue: float) -> None:
    chain = chain_of(good(tmp_path, LEAST.replace('designation = "LH1644"', lines)))
    assert (chain.designation, chain.strands) == (designation, strands)
    assert chain.tongue_width == pytest.approx(tongue)


def test_own_numbers_go_before_listed_ones(tmp_path: Path) -> None:
    chain = chain_of(good(tmp_path, LEAST + 'min_tensile_strength = "180 kN"'))
    assert (chain.min_tensile_strength, chain.pitch) == (180_000, 25.4)
    assert chain.source == "a list; min_tensile_strength from the design file"


OWN = """\
min_tensile_strength = "20 kN"
pitch = 12.7
width_over_pins = 17
plate_height = 11.8
pin_diameter = 4.45
"""


def test_own_chain(tmp_path: Path) -> None:
    design = good(tmp_path, LEAST.replace('designation = "LH1644"', OWN))
    chain = chain_of(design)
    assert (chain.designation, chain.kind, chain.confirmed) == ("own chain", "roller", True)
    assert chain.tongue_width == pytest.approx(0.35 * 17)
    assert {"chain.kind", "chain.tongue_width", "chain.plate_thickness"} <= {a.key for a in design.assumed}
    leaf = good(tmp_path, LEAST.replace('designation = "LH1644"', OWN + 'kind = "leaf"\nplate_thickness = 2\n'))
    assert (chain_of(leaf).kind, chain_of(leaf).tongue_width) == ("leaf", 2.0)


def test_constant_force(tmp_path: Path) -> None:
    spring = good(tmp_path, LEAST.replace("rate = 210", 'preload = "1.2 kN"\nrate = 0')).spring
    assert (spring.preload, spring.rate, spring.table) == (1200, 0, None)


TABLE = 'table = [["0 mm", "0 N"], ["90 mm", "9 kN"], ["180 mm", "14 kN"]]'
SAME_TABLE = [
    "draw [mm],force [N]\n0,0\n90,9000\n180,14000\n",
    "draw_mm,force_kN\n0,0\n90,9\n180,14\n",
    "# measured\nForce (kN), Draw (cm)\n\n0, 0\n9, 9\n14, 18\n",
    "\ufeffdraw [m],force [N]\r\n0,0\r\n0.09,9e3\r\n0.18,1.4e4\r\n",
]


@pytest.mark.parametrize("content", SAME_TABLE)
def test_a_table_and_a_file_give_the_same_spring(tmp_path: Path, content: str) -> None:
    (tmp_path / "curve.csv").write_text(content, encoding="utf-8", newline="")
    inline = good(tmp_path, LEAST.replace("rate = 210", TABLE))
    design = good(tmp_path, LEAST.replace("rate = 210", 'table = "curve.csv"'))
    assert inline.spring.table is not None
    assert design.spring.table is not None
    assert np.array_equal(design.spring.table, [[0, 90, 180], [0, 9000, 14000]])
    assert np.array_equal(design.spring.table, inline.spring.table)
    assert (design.spring.table_file, design.digest) == ("curve.csv", inline.digest)
    assert not design.spring.table.flags.writeable


def test_a_mass_that_is_stopped_elsewhere_need_not_be_known(tmp_path: Path) -> None:
    moving = good(tmp_path, LEAST + "[moving]\nstopped_elsewhere = true\n").moving
    assert moving is not None
    assert moving.stopped_elsewhere
    (problem,) = read(tmp_path, LEAST + "[moving]\nstopped_elsewhere = false\n").problems
    assert problem.key == "moving.mass"


# ------------------------------------------------------------------------------------------------------- lines


def test_every_way_of_writing_a_key_has_its_line(tmp_path: Path) -> None:
    text = """\
design.title = "x" # dotted
spring = {rate = 210, "preload" = "1 kN"}
mechanism = { crank_radius = 58, link_length = 86 }

[sheave] # a comment
center = [ # another
  430,
  # a third
  35,
]
"pitch_radius" = 48
[chain]
designation = "LH1644"
[materials.'A b']
[materials."c.d"]
yield = 3
[[list]]
[[list]]
  [list.inner]
  key = {deep.er = [1,
    {x = 2}]}
"""
    locate = read(tmp_path, text).locate
    expected = {
        "design": 1,
        "design.title": 1,
        "spring.rate": 2,
        "spring.preload": 2,
        "mechanism.link_length": 3,
        "sheave": 5,
        "sheave.center": 6,
        "sheave.center[0]": 7,
        "sheave.center[1]": 9,
        "sheave.pitch_radius": 11,
        "chain.designation": 13,
        'materials."A b"': 14,
        'materials."A b".yield': 14,  # not there: the table it would be in
        'materials."c.d".yield': 16,
        "list[0]": 17,
        "list[1]": 18,
        "list[1].inner": 19,
        "list[1].inner.key.deep.er[1].x": 21,
        "nowhere.at_all": None,
        "": None,
    }
    assert {key: locate(key) for key in expected} == expected


def test_windows_line_ends_and_a_byte_order_mark(tmp_path: Path) -> None:
    path = tmp_path / "rig.toml"
    path.write_bytes(b"\xef\xbb\xbf" + FULL.replace("\n", "\r\n").encode())
    reading = read_design(path, CATALOGUE)
    assert reading.problems == ()
    assert reading.locate("chain.slack") == line_of(FULL, "slack =")


# ------------------------------------------------------------------------------------------------------ digest


def _shuffled(text: str, order: list[int]) -> str:
    """The same design with its tables in another order, the keys in each turned round, and remarks between."""
    blocks = [block.splitlines() for block in text.strip().split("\n\n")]
    out: list[str] = []
    for head, *keys in (blocks[place] for place in order):
        turn = 0 if "obstacles = [" in keys else order[0] % len(keys)  # those run over several lines
        out += ["# remark", f"{head}  # remark", *keys[turn:], *keys[:turn], ""]
    return "\n".join(out)


@settings(max_examples=20, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(order=st.permutations(range(FULL.strip().count("\n\n") + 1)))
def test_digest_does_not_depend_on_order_or_remarks(tmp_path: Path, order: list[int]) -> None:
    assert good(tmp_path, _shuffled(FULL, order)).digest == good(tmp_path, FULL).digest


@pytest.mark.parametrize(
    ("old", "new"),
    [
        ('title = "Guard-panel impact rig"', 'title = "Guard panel impact rig"'),
        ('crank_radius = "58 mm"', 'crank_radius = "58.001 mm"'),
        ('yield = "900 MPa"', 'yield = "901 MPa"'),
        ("[350, 250]", "[350, 251]"),
        ("bolt_count = 6", "bolt_count = 5"),
    ],
)
def test_digest_depends_on_every_value(tmp_path: Path, old: str, new: str) -> None:
    assert good(tmp_path, FULL.replace(old, new)).digest != good(tmp_path, FULL).digest


def test_digest_does_not_depend_on_how_a_value_is_written(tmp_path: Path) -> None:
    other = FULL.replace('"58 mm"', "58").replace('"1.2 kN"', '"1200 N"').replace("format = 1 ", "# ")
    assert good(tmp_path, other).digest == good(tmp_path, FULL).digest
