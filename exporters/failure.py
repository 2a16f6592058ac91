"""What can go wrong outside the design, to be told in one line."""

from __future__ import annotations


class ToolFailure(RuntimeError):
    """Something outside the design failed: a missing library, a file that did not come out as it should."""
