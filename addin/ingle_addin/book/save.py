"""Puts a finished workbook in its place: written beside, checked, then moved over in one step."""

from __future__ import annotations

import contextlib
import os
import shutil
import stat
import tempfile
from collections.abc import Callable
from pathlib import Path
from typing import IO

from ingle_addin.book.book import Fingerprint, fingerprint
from ingle_addin.book.errors import BookError


def refuse_if_open(path: Path) -> None:
    """Refuse a workbook that a spreadsheet program has open: it would save its own copy over ours."""
    for lock in (path.with_name(f".~lock.{path.name}#"), path.with_name(f"~${path.name}")):
        if lock.exists():
            raise BookError(f"{path} is open in a spreadsheet program; close it there first (or delete {lock.name} if it is not)")


def check_target(source: Path, out: Path, *, in_place: bool) -> None:
    """Refuse, before any work is done, a place that cannot be written."""
    if out.is_dir():
        raise BookError(f"{out} is a folder; name a file in it")
    if not in_place and out.exists() and source.exists() and out.samefile(source):
        raise BookError(f"{out} is the workbook itself; name another file, or say --in-place to replace it")
    folder = out.parent
    if not folder.is_dir():
        raise BookError(f"the folder {folder} does not exist; make it first")
    if not os.access(folder, os.W_OK | os.X_OK):
        raise BookError(f"the folder {folder} may not be written to; name another with -o")
    if in_place:
        refuse_if_open(source)
    if out.exists():
        refuse_if_open(out)


def place(source: Path, mark: Fingerprint, out: Path, write: Callable[[IO[bytes]], None], *, in_place: bool) -> Path | None:
    """Let ``write`` fill a file beside ``out``, then move it there; return the backup kept of ``source``, if any.

    A run that is stopped at any moment leaves the old file whole. Refuses if ``source`` no longer is the file that was
    read, or is open elsewhere by now.
    """
    try:
        handle, name = tempfile.mkstemp(prefix=f".{out.stem[:40]}.", suffix=".part", dir=out.parent)
    except OSError as error:
        raise BookError(f"the folder {out.parent} cannot be written to: {error.strerror}") from None
    beside = Path(name)
    backup: Path | None = None
    try:
        with os.fdopen(handle, "wb") as file:
            write(file)
            file.flush()
            os.fsync(file.fileno())
        _copy_mode(out if out.exists() else source, beside)
        if fingerprint(source) != mark:
            raise BookError(f"{source} was changed by another program meanwhile; nothing was written, run again")
        if in_place:
            refuse_if_open(source)
            backup = source.with_name(source.name + ".bak")
            _back_up(source, backup)
        os.replace(beside, out)
    except OSError as error:
        raise BookError(f"{out} cannot be written: {error.strerror}; nothing was changed") from None
    finally:
        with contextlib.suppress(FileNotFoundError):
            beside.unlink()
    return backup


def _copy_mode(model: Path, target: Path) -> None:
    os.chmod(target, stat.S_IMODE(model.stat().st_mode))


def _back_up(source: Path, backup: Path) -> None:
    """Keep a copy, itself written beside and moved, so that it is never half a file."""
    half = backup.with_name(backup.name + ".part")
    try:
        shutil.copy2(source, half)
        os.replace(half, backup)
    finally:
        with contextlib.suppress(FileNotFoundError):
            half.unlink()
