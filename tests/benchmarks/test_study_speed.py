"""Time of the studies of one design, the least of a few runs. Run: pytest tests/benchmarks -s"""

from __future__ import annotations

import time
from collections.abc import Callable
from pathlib import Path

import pytest

from loads.backing_off import backing_off_study
from loads.chain_study import chain_study
from loads.checks.context import Context
from loads.enclosure import enclosure_study
from loads.fatigue.study import fatigue_study
from loads.power_loss.study import power_loss_study
from loads.release.study import release_study
from tests.starters import NAMES, changed, context_of, examined, text_of, whole_text_of


def _least(what: str, run: Callable[[], object], runs: int) -> float:
    run()
    took = []
    for _ in range(runs):
        start = time.perf_counter()
        run()
        took.append(time.perf_counter() - start)
    print(f"\n{what}: {1e3 * min(took):.1f} ms")
    return min(took)


def _context(folder: Path, text: str) -> Context:
    return context_of(examined(folder, text))


def test_power_loss(tmp_path: Path) -> None:
    c = _context(tmp_path, text_of("impact-rig"))
    assert _least("power loss", lambda: power_loss_study(c), 3) < 0.1


def test_backing_off(tmp_path: Path) -> None:
    c = _context(tmp_path, changed("seed-thrower", chain__slack='"20 mm"'))
    assert _least("backing off, 20 mm of slack", lambda: backing_off_study(c), 5) < 0.1


@pytest.mark.parametrize("slack", [0.0, 5.0, 30.0])
def test_enclosure(tmp_path: Path, slack: float) -> None:
    walls = dict.fromkeys((f"enclosure__{where}" for where in ("above", "below", "behind", "ahead")), "900")
    c = _context(tmp_path, changed("impact-rig", chain__slack=f'"{slack} mm"', spring__most_draw='"400 mm"', **walls))
    assert _least(f"enclosure, {slack:g} mm of slack", lambda: enclosure_study(c), 3) < 1.0


@pytest.mark.parametrize("name", NAMES)
def test_release(tmp_path: Path, name: str) -> None:
    c = _context(tmp_path, whole_text_of(name))
    assert _least(f"release of {name}", lambda: release_study(c), 3) < 2.0


def test_fatigue(tmp_path: Path) -> None:
    c = _context(tmp_path, changed("impact-rig", fatigue__shots="20000.0"))
    assert _least("fatigue", lambda: fatigue_study(c), 10) < 0.1


def test_chain(tmp_path: Path) -> None:
    e = examined(tmp_path, text_of("impact-rig"))
    assert _least("chain", lambda: chain_study(e.design, e.machine, e.figures, e.past, e.sizes), 5) < 0.1
