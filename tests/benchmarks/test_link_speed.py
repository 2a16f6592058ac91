"""The link's checks over all its sections and crank angles. Run: pytest tests/benchmarks -s"""

from __future__ import annotations

import time
from pathlib import Path

from loads.checks import link
from tests.starters import context_of, examined, text_of


def test_the_links_checks(tmp_path: Path) -> None:
    e = examined(tmp_path, text_of("impact-rig"))
    c = context_of(e)
    took = []
    for _ in range(50):
        start = time.perf_counter()
        link.check(c)
        took.append(time.perf_counter() - start)
    print(f"\nlink, {e.past.state.crank_angle.size} crank angles: {sorted(took)[5] * 1e3:.2f} ms")
    assert sorted(took)[5] < 5e-3
