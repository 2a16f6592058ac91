"""The trigger study over its full number of samples, and the drive study of a design without a motor: time and memory."""

from __future__ import annotations

import subprocess
import sys
import time
from pathlib import Path

from loads.drive import drive_study
from loads.examine import examine
from tests.starters import context_of, text_of

STUDY = """
import resource, sys, time
from pathlib import Path
from loads.examine import examine
import loads.studies.registry as registry
took = []
run = registry.STUDIES["trigger"]
def timed(c):
    start = time.perf_counter()
    found = run(c)
    took.append(time.perf_counter() - start)
    return found
registry.STUDIES["trigger"] = timed
e = examine(Path(sys.argv[1]))
assert e.studies["trigger"].samples >= 100_000
unit = 1024 if sys.platform != "darwin" else 1
print(took[0], resource.getrusage(resource.RUSAGE_SELF).ru_maxrss * unit / 1e9)
"""


def test_a_hundred_thousand_machines(tmp_path: Path) -> None:
    design = tmp_path / "rig.toml"
    design.write_text(f"{text_of('impact-rig')}\n[tolerances]\n", encoding="utf-8")
    command = [sys.executable, "-c", STUDY, str(design)]
    done = subprocess.run(command, check=True, capture_output=True, text=True)
    seconds, gigabytes = (float(x) for x in done.stdout.split())
    print(f"\ntrigger study, 131,072 machines: {seconds:.2f} s with its imports, {gigabytes:.2f} GB")
    assert seconds < 10.0
    assert gigabytes < 1.0


def test_the_demands_on_a_motor_cost_little(tmp_path: Path) -> None:
    design = tmp_path / "rig.toml"
    design.write_text(text_of("impact-rig"), encoding="utf-8")
    c = context_of(examine(design))
    drive_study(c)
    start = time.perf_counter()
    drive_study(c)
    seconds = time.perf_counter() - start
    print(f"\ndrive study without a motor: {1e3 * seconds:.1f} ms")
    assert seconds < 0.05
