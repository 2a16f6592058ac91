"""The solid modeller's shared libraries: present, or one line that says what to install."""

import importlib
import re

from exporters.failure import ToolFailure

# Measured on a minimal Debian 12: the modeller's binaries link to these three and do not bring them along.
# README and .ci/run give the same list; a test compares.
DEBIAN_PACKAGES = ("libgl1", "libx11-6", "libexpat1")

INSTALL_ON_DEBIAN = "apt-get install -y --no-install-recommends " + " ".join(DEBIAN_PACKAGES)

_SHARED_LIBRARY = re.compile(r"\b(lib[\w+.-]*?\.so(?:\.\d+)*)\s*: cannot open shared object file")


class ModellerMissing(ToolFailure):
    """The solid modeller cannot be loaded. The message is one line, meant for the person at the terminal."""


def need_modeller() -> None:
    """Load the solid modeller, or say in one line what keeps it from loading.

    Call it at the start of whatever makes solids, before anything is written; `check` must never call it,
    because loading takes longer than all that `check` does.

    Raises
    ------
    ModellerMissing
        A shared library of the system is absent, the Python package is not installed, or its binary does
        not fit this system.
    """
    try:
        importlib.import_module("cadquery")
    except (ImportError, OSError) as error:
        raise ModellerMissing(_in_one_line(error)) from error


def _in_one_line(error: ImportError | OSError) -> str:
    """What is missing and how to get it, from the error that loading the modeller ended in."""
    text = " ".join(str(error).split())
    library = _SHARED_LIBRARY.search(text)
    if library:
        return (
            f"the solid modeller needs the system library {library[1]}, which is not installed; "
            f"on Debian or Ubuntu: sudo {INSTALL_ON_DEBIAN}"
        )
    if isinstance(error, ModuleNotFoundError):
        return (
            f"the solid modeller is not installed here (no Python package {error.name}); "
            "install drawcrank again as its README says"
        )
    if "DLL load failed" in text:
        return (
            "the solid modeller needs a DLL that is not installed, "
            f"most often the Microsoft Visual C++ Redistributable (x64): {text}"
        )
    return f"the solid modeller cannot be loaded on this system: {text}"
