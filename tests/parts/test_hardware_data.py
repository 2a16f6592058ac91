"""The table of bought parts and stock sizes: every row whole, and consistent with itself."""

import tomllib
from importlib.resources import files
from itertools import pairwise
from math import pi
from typing import Any

import pytest

Row = dict[str, Any]

HARDWARE: dict[str, Any] = tomllib.loads((files("parts") / "data" / "hardware.toml").read_text(encoding="utf-8"))
SCREWS: list[Row] = HARDWARE["cap_screw"]
DOWELS: list[Row] = HARDWARE["dowel"]
RINGS: list[Row] = HARDWARE["retaining_ring"]
PREFERRED: Row = HARDWARE["preferred"]

KEYS = {
    "cap_screw": {
        "size",
        "thread",
        "diameter",
        "pitch",
        "clearance_hole",
        "tapping_hole",
        "head_diameter",
        "head_height",
        "counterbore_diameter",
        "tensile_stress_area",
    },
    "dowel": {"diameter"},
    "retaining_ring": {
        "shaft",
        "groove_diameter",
        "groove_width",
        "groove_edge",
        "ring_thickness",
        "lug_height",
        "space_diameter",
    },
}


@pytest.mark.parametrize("kind", KEYS)
def test_rows_have_their_keys_and_are_positive(kind: str) -> None:
    for row in HARDWARE[kind]:
        assert KEYS[kind] | {"source", "confirmed"} <= set(row)
        assert set(row) <= KEYS[kind] | {"source", "confirmed", "from_memory"}
        assert set(row.get("from_memory", [])) <= KEYS[kind]
        assert row["source"]
        assert isinstance(row["confirmed"], bool)
        assert all(value > 0 for key, value in row.items() if key != "confirmed" and isinstance(value, float))


@pytest.mark.parametrize(
    ("kind", "key"), [("cap_screw", "diameter"), ("dowel", "diameter"), ("retaining_ring", "shaft")]
)
def test_rows_go_up_in_size(kind: str, key: str) -> None:
    for less, more in pairwise(HARDWARE[kind]):
        for name in KEYS[kind] - {"size", "thread", "groove_edge"}:
            assert less[name] <= more[name], (kind, more[key], name)
        assert less[key] < more[key]


@pytest.mark.parametrize("row", SCREWS, ids=lambda row: row["size"])
def test_a_screw_fits_its_holes(row: Row) -> None:
    d, p = row["diameter"], row["pitch"]
    assert row["size"] == f"M{d:g}"
    assert row["thread"] == f"M{d:g} x {p:g}"
    assert row["tapping_hole"] == pytest.approx(d - p, abs=0.06)
    assert d < row["clearance_hole"] < row["head_diameter"] < row["counterbore_diameter"]
    # ISO 4762: the head is as high as the thread is thick
    assert row["head_height"] == d
    # ISO 898-1
    assert row["tensile_stress_area"] == pytest.approx(pi / 4 * (d - 0.9382 * p) ** 2, rel=0.005)


@pytest.mark.parametrize("row", RINGS, ids=lambda row: f"{row['shaft']:g}")
def test_a_ring_sits_in_its_groove(row: Row) -> None:
    depth = (row["shaft"] - row["groove_diameter"]) / 2
    assert 0.15 < depth < 0.1 * row["shaft"]
    assert row["ring_thickness"] < row["groove_width"] <= row["ring_thickness"] + 0.2
    assert row["groove_edge"] == pytest.approx(3 * depth, abs=0.1)
    assert row["space_diameter"] > row["shaft"] + 2 * row["lug_height"]


def test_rings_are_listed_for_shafts_of_8_to_100_mm() -> None:
    shafts = [row["shaft"] for row in RINGS]
    assert shafts[0] == 8
    assert shafts[-1] == 100
    assert {10, 12, 16, 20, 25, 30, 40, 50, 60, 80} <= set(shafts)


@pytest.mark.parametrize("name", ["pin_diameters", "plate_thicknesses", "pin_diameters_us", "plate_thicknesses_us"])
def test_stock_sizes_go_up(name: str) -> None:
    sizes = PREFERRED[name]
    assert sizes == sorted(set(sizes))
    assert sizes[0] > 0
    if name.endswith("_us"):
        for size in sizes:
            assert (size / 25.4 * 16) == pytest.approx(round(size / 25.4 * 16))


def test_stock_sizes_say_that_they_are_common_practice() -> None:
    assert PREFERRED["source"] == "common practice, no source"
    assert PREFERRED["confirmed"] is False
