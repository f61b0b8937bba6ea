"""Says what is going on, once it has taken two seconds: a bar on a terminal, a line now and then in a file."""

from __future__ import annotations

import sys
import threading
from collections.abc import Iterator
from contextlib import contextmanager
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from ingle_addin.book.progress import Progress

PATIENCE = 2.0  # seconds of silence
BETWEEN_LINES = 10.0
_BETWEEN_FRAMES = 0.2


class _Teller(threading.Thread):
    """Waits beside the work, so that a long stage that reports nothing is seen too."""

    def __init__(self) -> None:
        super().__init__(daemon=True)
        self.stage, self.share = "starting", 0.0
        self._done = threading.Event()

    def tell(self, stage: str, share: float) -> None:
        """Take note; a bar that went back would only puzzle."""
        self.stage, self.share = stage, max(share, self.share)

    def run(self) -> None:
        if self._done.wait(PATIENCE):
            return
        if not sys.stderr.isatty():
            while True:
                print(f"ingle: {self.share:.0%} done, {self.stage} …", file=sys.stderr, flush=True)
                if self._done.wait(BETWEEN_LINES):
                    return
        # Imported only now: what is done within two seconds should not wait for it.
        from rich.console import Console
        from rich.progress import BarColumn, TextColumn, TimeElapsedColumn
        from rich.progress import Progress as Bar

        columns = (TextColumn("{task.description}", markup=False), BarColumn(), TimeElapsedColumn())
        with Bar(*columns, console=Console(stderr=True), transient=True) as bar:
            task = bar.add_task(self.stage, total=1.0)
            while not self._done.wait(_BETWEEN_FRAMES):
                bar.update(task, description=self.stage, completed=self.share)

    def stop(self) -> None:
        """End, with the bar gone from the terminal."""
        self._done.set()
        self.join()


@contextmanager
def shown_progress() -> Iterator[Progress]:
    """A function to report to; nothing is seen of it if all is done within :data:`PATIENCE` seconds."""
    teller = _Teller()
    teller.start()
    try:
        yield teller.tell
    finally:
        teller.stop()
