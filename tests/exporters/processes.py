"""Other Python processes that see the same package as this one."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

import parts

_PACKAGE_ROOT = str(Path(parts.__file__).parents[1])


def run_python(*arguments: str, hash_seed: int = 0) -> str:
    """What a Python process with these arguments prints; it must end well."""
    environment = {**os.environ, "PYTHONHASHSEED": str(hash_seed), "PYTHONPATH": _PACKAGE_ROOT}
    done = subprocess.run(
        [sys.executable, *arguments], capture_output=True, text=True, env=environment, encoding="utf-8"
    )
    assert done.returncode == 0, done.stderr
    return done.stdout


def write_samples(folder: Path, kind: str, hash_seed: int) -> str:
    folder.mkdir(exist_ok=True)
    script = Path(__file__).with_name("write_samples.py")
    return run_python(str(script), str(folder), kind, hash_seed=hash_seed)
