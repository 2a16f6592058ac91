"""The post of a stop is a pin held in the disc: its rows keep their names, and their numbers follow by hand."""

from __future__ import annotations

import math
from pathlib import Path

import pytest

from tests.starters import changed, examined, text_of


def test_rows_of_a_post_by_hand(tmp_path: Path) -> None:
    """Post 10 mm of 900 and 1100 MPa: 0.6 · 78.540 · 1100 = 51 836 N, π/32 · 10³ · 900 = 88 357 N·mm."""
    e = examined(tmp_path, text_of("soil-tamper"))
    assert (e.sizes.stop.style, e.sizes.stop.diameter) == ("post", 10.0)
    rows = {c.check: c for c in e.checks if (c.part, c.site) == ("stop", "root") and c.check.startswith("post")}
    assert set(rows) == {"post shear", "post bending", "post shear with bending"}
    shear, bending, both = rows["post shear"], rows["post bending"], rows["post shear with bending"]
    assert shear.capacity == pytest.approx(51836.0, abs=0.5)
    assert bending.capacity == pytest.approx(88357.0, abs=0.5)
    push = float(e.figures.largest_stop) * 1.5 * 0.6  # shock factor and load share of the design
    assert shear.demand == pytest.approx(push, rel=1e-9)
    assert bending.demand == pytest.approx(push * 5.0, rel=1e-9)  # gap 1 mm and half of a link of 8 mm
    assert both.demand == pytest.approx(math.hypot(push / 51836.3, push * 5.0 / 88357.3), rel=1e-5)
    assert bending.method == "W_el f_y, post held in the disc"
    assert (shear.target, bending.target, both.target) == (2.4, 2.0, 2.0)


def test_a_post_of_another_metal_says_so(tmp_path: Path) -> None:
    e = examined(tmp_path, changed("soil-tamper", stop__material='"EN-AW-7075-T6"', stop__style='"post"'))
    row = next(c for c in e.checks if c.check == "post bending")
    assert "a rule for structural steel, applied to EN-AW-7075-T6" in row.note
