"""The bolts of a stop block as half a T-stub, by hand from EN 1993-1-8 tables 3.4 and 6.2."""

from __future__ import annotations

from pathlib import Path

import pytest

from loads.checks.stop import bolt_share, t_stub_capacity
from tests.starters import examined, text_of


def test_the_bolt_governs_under_a_thick_block() -> None:
    """M8 (36.6 mm²) class 8.8 under a block 40 × 24 × 12 mm of 650 MPa, bolt 6 mm from the face.

    M_pl = 0.25 · 20 · 144 · 650 = 468 000 N·mm, over 6 mm 78 000 N; 0.9 · 800 · 36.6 = 26 352 N.
    """
    capacity, mode = t_stub_capacity(40.0, 24.0, 12.0, 650.0, 36.6, 800.0)
    assert capacity == pytest.approx(26352.0)
    assert mode.startswith("mode 3")


def test_a_thin_block_yields_first() -> None:
    """The same block 5 mm high: M_pl = 0.25 · 20 · 25 · 650 = 81 250 N·mm, over 6 mm 13 541.7 N."""
    capacity, mode = t_stub_capacity(40.0, 24.0, 5.0, 650.0, 36.6, 800.0)
    assert capacity == pytest.approx(13541.667)
    assert mode.startswith("mode 1-2")
    # a long block yields in a circle about the bolt: l_eff = 2π · 6 = 37.699 mm, whatever its length
    assert t_stub_capacity(200.0, 24.0, 5.0, 650.0, 36.6, 800.0)[0] == pytest.approx(37.699 / 20 * 13541.667, rel=1e-5)
    assert t_stub_capacity(400.0, 24.0, 5.0, 650.0, 36.6, 800.0) == t_stub_capacity(
        200.0, 24.0, 5.0, 650.0, 36.6, 800.0
    )


def test_the_far_edges_push_is_in_the_pull() -> None:
    """Block 24 mm wide, bolts 6 and 18 mm from the edge it tips about: 100 N·m pull 5 kN on the nearer bolt.

    100 000 · 18/(18² + 6²) = 5000 N, the other 1666.7 N: together 6666.7 N, which the far edge pushes back.
    """
    near = 100e3 * bolt_share(24.0)
    assert near == pytest.approx(5000.0)
    assert near * 18.0 + near / 3.0 * 6.0 == pytest.approx(100e3)


def test_the_row_stands_in_the_bill_with_its_mode(tmp_path: Path) -> None:
    e = examined(tmp_path, text_of("impact-rig"))
    row = next(c for c in e.checks if c.check == "prying on the bolts")
    assert "mode 3" in row.method
    assert row.holds
    lift = next(c for c in e.checks if c.check == "bolt tension")
    assert row.demand == lift.demand
