"""Workers that fail in one way, for the tests of the client: run with the way as the argument."""

from __future__ import annotations

import os
import sys
import time
from pathlib import Path

from ingle_addin.calc.inside import wire


def main() -> None:
    way, marks = sys.argv[1], Path(sys.argv[2])
    with marks.open("a") as file:
        file.write(way + "\n")
    starts = len(marks.read_text().splitlines())
    if way == "dies at once":
        os._exit(3)
    while True:
        message = wire.read(0)
        if message == "sleep":
            time.sleep(60)
        if message == "die" or (message == "die once" and starts == 1):
            os._exit(5)
        if message == "nonsense":
            wire.write(1, b"\x05\0\0\0\0\0\0\0hello")
            continue
        wire.write(1, wire.frame((message, os.getpid())))


if __name__ == "__main__":
    main()
