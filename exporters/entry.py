"""Where the command begins: nothing heavy is imported before an interruption can be told in one line.

Until something is written an interruption ends the process there and then. A ``KeyboardInterrupt`` would not do: raised
within an import it is swallowed or shown with a traceback, depending on where it comes.
"""

from __future__ import annotations

import os
import signal

STOPPED = 130
INTERRUPTED = "drawcrank: interrupted; nothing was changed"


def main() -> None:
    """Run the command."""
    heeded = signal.getsignal(signal.SIGINT) is signal.default_int_handler  # not where the shell has it ignored
    if heeded:
        signal.signal(signal.SIGINT, _leave)
    try:
        from exporters.command import main as command

        command()
    finally:
        if heeded:
            signal.signal(signal.SIGINT, signal.SIG_IGN)  # all is done and said; taking the interpreter down is no work


def _leave(number: int, frame: object) -> None:
    try:
        os.write(2, f"{INTERRUPTED}\n".encode())  # past the stream, which may be in the middle of a line
    finally:
        os._exit(STOPPED)
