"""Half-written files: made beside their target, held by a lock while they are written, swept away if their run was killed."""

from __future__ import annotations

import contextlib
import os
import re
import tempfile
from collections.abc import Iterator
from pathlib import Path
from typing import IO

try:
    import fcntl
except ImportError:  # Windows, where a file that is open cannot be deleted: that serves as the lock
    fcntl = None  # type: ignore[assignment]

_ENDING = ".ingle.part"
_STEM = 40  # so that the longest of names still has room for the rest


def _prefix(target: Path) -> str:
    return f".{target.name[:_STEM]}."


@contextlib.contextmanager
def beside(target: Path) -> Iterator[tuple[IO[bytes], Path]]:
    """A new hidden file in the target's folder, open for writing, to be moved over the target; it is gone afterwards.

    While it is open no other run takes it for a leftover. Raises OSError if the folder takes no files.
    """
    file, path = _made(target)
    try:
        with file:
            yield file, path
    finally:
        with contextlib.suppress(FileNotFoundError):
            path.unlink()


def _made(target: Path) -> tuple[IO[bytes], Path]:
    while True:
        handle, name = tempfile.mkstemp(prefix=_prefix(target), suffix=_ENDING, dir=target.parent)
        file, path = os.fdopen(handle, "wb"), Path(name)
        _lock(handle, wait=True)
        if path.exists():
            return file, path
        file.close()  # another run has swept it away before it was locked


def sweep(target: Path) -> None:
    """Delete what killed runs have left beside a target. A file that a living run holds stays."""
    pattern = re.compile(re.escape(_prefix(target)) + r"[a-z0-9_]{8}" + re.escape(_ENDING))
    with contextlib.suppress(OSError):  # a leftover that cannot be deleted harms nobody
        for each in target.parent.iterdir():
            if pattern.fullmatch(each.name):
                _delete_if_free(each)


def _delete_if_free(path: Path) -> None:
    with contextlib.suppress(OSError):
        if fcntl is None:
            path.unlink()
            return
        with path.open("rb") as file:
            if _lock(file.fileno()):
                path.unlink()


def _lock(handle: int, *, wait: bool = False) -> bool:
    """Take the lock of a file; whether it was to be had. It ends with the process, however that ends."""
    if fcntl is None:
        return True
    try:
        fcntl.flock(handle, fcntl.LOCK_EX | (0 if wait else fcntl.LOCK_NB))
    except OSError:  # held by another, or a file system without locks
        return False
    return True
