"""Speed and memory, as ratios within one run where the machine would otherwise decide. Run: pytest tests/benchmarks -s

These are not part of the tests: a shared machine may be slow for a moment. Ratios are of medians; figures in milliseconds
are the least of many runs, which is what the code costs while nothing else runs.
"""

from __future__ import annotations

import statistics
import subprocess
import sys
import time
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from loads.checks import all_checks
from loads.cycle import cycle, trace
from loads.examine import examine
from loads.linkage import make_linkage
from loads.spring_law import SpringLaw
from tests.loads.machines import TABLE
from tests.starters import text_of

MANY = """
import resource, sys, time
import numpy as np
from loads.cycle import curves, cycle
from loads.linkage import make_linkage
from loads.spring_law import SpringLaw
n = 10_000
rng = np.random.default_rng(1)
machines = make_linkage(
    crank_radius=rng.uniform(40, 60, n), link_length=rng.uniform(70, 90, n), stop_reach=68.0,
    seat_angle=np.radians(rng.uniform(-3, 5, n)), sheave_x=rng.uniform(300, 600, n), sheave_y=rng.uniform(-50, 50, n),
    pitch_radius=45.0, wrap=1.0, spring=SpringLaw(np.full(n, 500.0), np.full(n, 180.0)), slack=4.0)
start = time.perf_counter()
figures = cycle(machines)
curves(machines, figures, np.radians(1.0), ("pull", "tension", "torque", "stop_force"))
seconds = time.perf_counter() - start
assert not np.isnan(figures.events.release).any()
unit = 1024 if sys.platform != "darwin" else 1
print(seconds, resource.getrusage(resource.RUSAGE_SELF).ru_maxrss * unit / 1e9)
"""


def _runs(run: Callable[[], object], times: int) -> list[float]:
    run()
    took = []
    for _ in range(times):
        start = time.perf_counter()
        run()
        took.append(time.perf_counter() - start)
    return took


def _median(run: Callable[[], object], times: int) -> float:
    return statistics.median(_runs(run, times))


def _process(command: Sequence[str], times: int) -> float:
    return _median(lambda: subprocess.run(command, check=True, capture_output=True), times)


def _drawcrank() -> str:
    return str(Path(sys.executable).parent / "drawcrank")


def test_one_cycle_at_half_a_degree() -> None:
    m = TABLE["near"]

    def solve() -> None:
        trace(m, cycle(m))

    milliseconds = min(_runs(solve, 100)) * 1e3
    print(f"\ncycle of one design at 0.5°: {milliseconds:.2f} ms")
    assert milliseconds < 5.0


def test_ten_thousand_designs_at_one_degree() -> None:
    done = subprocess.run([sys.executable, "-c", MANY], check=True, capture_output=True, text=True)
    seconds, gigabytes = (float(x) for x in done.stdout.split())
    print(f"\n10,000 designs at 1° in one call: {seconds:.2f} s, {gigabytes:.2f} GB")
    assert seconds < 10.0
    assert gigabytes < 1.0


def test_check_starts_in_half_the_modellers_import(tmp_path: Path) -> None:
    design = tmp_path / "rig.toml"
    design.write_text(text_of("impact-rig"), encoding="utf-8")
    modeller = _process([sys.executable, "-c", "import cadquery"], 5)
    check = _process([_drawcrank(), "check", str(design)], 5)
    print(f"\ncheck {check:.2f} s, importing the modeller {modeller:.2f} s: ratio {check / modeller:.2f}")
    assert check / modeller <= 0.5


def test_build_against_the_bare_calls(tmp_path: Path) -> None:
    design = tmp_path / "rig.toml"
    design.write_text(text_of("impact-rig"), encoding="utf-8")
    script = str(Path(__file__).with_name("bare_build.py"))
    count = iter(range(100))
    bare = _median(
        lambda: subprocess.run(
            [sys.executable, script, str(design), str(tmp_path / f"bare{next(count)}")], check=True, capture_output=True
        ),
        3,
    )
    build = _median(
        lambda: subprocess.run(
            [_drawcrank(), "build", str(design), "--to", str(tmp_path / f"built{next(count)}")],
            check=True,
            capture_output=True,
        ),
        3,
    )
    print(f"\nbuild {build:.2f} s, bare calls {bare:.2f} s: ratio {build / bare:.2f}")
    assert build / bare <= 2.5


def test_cost_grows_no_faster_than_the_number_of_designs() -> None:
    def solve(n: int) -> float:
        r = np.linspace(40.0, 60.0, n)
        machines = make_linkage(
            crank_radius=r, link_length=85.0, seat_angle=0.05, stop_reach=70.0, sheave_x=420.0, sheave_y=20.0,
            pitch_radius=45.0, wrap=1.0, spring=SpringLaw(np.full(n, 500.0), np.full(n, 180.0)),
        )  # fmt: skip
        return _median(lambda: cycle(machines), 3)

    ratio = solve(4096) / solve(512)
    print(f"\n8 times as many designs take {ratio:.1f} times as long")
    assert ratio < 12.0


def test_all_checks_of_one_design(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    design = tmp_path / "rig.toml"
    design.write_text(text_of("impact-rig"), encoding="utf-8")
    took: list[float] = []

    def timed(*given: Any) -> Any:
        took.append(min(_runs(lambda: all_checks(*given), 20)) * 1e3)
        return all_checks(*given)

    monkeypatch.setattr("loads.examine.all_checks", timed)
    examine(design)
    print(f"\nall checks of one design over the cycle: {took[0]:.1f} ms")
    assert took[0] < 20.0
