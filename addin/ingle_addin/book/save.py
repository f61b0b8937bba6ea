"""Puts a finished workbook in its place: written beside, checked, then moved over in one step."""

from __future__ import annotations

import os
import shutil
import stat
from collections.abc import Callable
from pathlib import Path
from typing import IO

from ingle_addin.book.beside import beside, sweep
from ingle_addin.book.book import Fingerprint, fingerprint
from ingle_addin.book.errors import BookError

_SUFFIXES = (".xlsx", ".xlsm", ".xltx", ".xltm")


def kind_of(book: Path) -> str:
    """The ending that a copy of a workbook must have."""
    return book.suffix if book.suffix.lower() in _SUFFIXES else ".xlsx"


def refuse_if_open(path: Path) -> None:
    """Refuse a workbook that a spreadsheet program has open: it would save its own copy over ours."""
    for lock in (path.with_name(f".~lock.{path.name}#"), path.with_name(f"~${path.name}")):
        if lock.exists():
            raise BookError(f"{path} is open in a spreadsheet program; close it there first (or delete {lock.name} if it is not)")


def check_target(source: Path, out: Path, *, in_place: bool) -> None:
    """Refuse, before any work is done, a place that cannot be written."""
    if out.is_dir():
        raise BookError(f"{out} is a folder; name a file in it")
    kind = kind_of(source)
    if not in_place and out.suffix.lower() != kind.lower():
        raise BookError(f"{out} does not end in {kind}; a workbook stays of its own kind, so name it {out.with_suffix(kind).name}")
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

    A run that is stopped at any moment leaves the old file whole; what it leaves beside is swept away by the next one.
    Refuses if ``source`` no longer is the file that was read, or is open elsewhere by now.
    """
    target = out.resolve()  # a link stays a link: the file it leads to is replaced
    backup = source.with_name(source.name + ".bak") if in_place else None
    sweep(target)
    try:
        with beside(target) as (file, half):
            write(file)
            file.flush()
            os.fsync(file.fileno())
            _copy_mode(target if target.exists() else source, half)
            if fingerprint(source) != mark:
                raise BookError(f"{source} was changed by another program meanwhile; nothing was written, run again")
            if backup is not None:
                refuse_if_open(source)
                _back_up(source, backup)
            if os.name == "nt":
                file.close()  # an open file cannot be moved there
            os.replace(half, target)
    except OSError as error:
        raise BookError(f"{out} cannot be written: {error.strerror}; nothing was changed") from None
    return backup


def _copy_mode(model: Path, target: Path) -> None:
    os.chmod(target, stat.S_IMODE(model.stat().st_mode))


def _back_up(source: Path, backup: Path) -> None:
    """Keep a copy, itself written beside and moved, so that it is never half a file."""
    sweep(backup)
    with beside(backup) as (file, half):
        with source.open("rb") as old:
            shutil.copyfileobj(old, file)
        file.flush()
        os.fsync(file.fileno())
        shutil.copystat(source, half)
        if os.name == "nt":
            file.close()
        os.replace(half, backup)
