"""The `ingle` command. Each command imports what it needs when it runs, so that help is quick."""

from __future__ import annotations

import sys

__all__ = ["main"]


def main() -> None:
    """Run the command line and leave with its exit code."""
    for stream in (sys.stdout, sys.stderr):
        reconfigure = getattr(stream, "reconfigure", None)
        if reconfigure is not None:
            reconfigure(errors="replace")  # a terminal without ² or ° shows ? instead of failing
    from ingle_addin.command.app import run

    sys.exit(run())
