"""Turns one spelling of Ingle's functions into the other, wherever a workbook keeps a formula; every other byte stays."""

from __future__ import annotations

import re
from collections.abc import Collection, Iterator, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import IO, Literal

from ingle_addin.book.archive import Archive
from ingle_addin.book.book import fingerprint
from ingle_addin.book.errors import BookError
from ingle_addin.book.formula_bytes import FormulaText, formula_texts
from ingle_addin.book.parts import read_parts
from ingle_addin.book.progress import Progress
from ingle_addin.book.report import count
from ingle_addin.book.save import check_target, kind_of, place
from ingle_addin.book.spelling import Spelling

# The two spellings: INGLE.PEAK and INGLE_PEAK.
To = Literal["dotted", "underscored"]


@dataclass(frozen=True)
class Respelled:
    """What was changed: ``formulas`` in sheets, ``elsewhere`` in names, tables, formats and rules; ``unknown`` names left."""

    book: Path
    to: To
    calls: int = 0
    formulas: int = 0
    elsewhere: int = 0
    unknown: tuple[str, ...] = ()
    out: Path | None = None
    backup: Path | None = None


# What is no name of a function comes first, so that a name inside it is passed over.
_PIECES = re.compile(
    r"""
      "(?:[^"]|"")*"
    | (?P<call> (?: '(?:[^']|'')*'! | \[[^\[\]]*\][\w.]*! | [\w.\\]+! )? [^\W\d][\w.]* (?=\s*\() )
    | '(?:[^']|'')*'!?
    | \[(?:[^\[\]']|'.|\[(?:[^\[\]']|'.)*\])*\]
    | [\w.\\?]+
    """,
    re.VERBOSE | re.DOTALL,
)
_FAMILY = re.compile(rb"ingle[._]", re.IGNORECASE)
_SHEETS = "xl/worksheets/"


def respell(
    book: Path,
    to: To,
    out: Path | None = None,
    *,
    functions: Collection[str],
    in_place: bool = False,
    progress: Progress | None = None,
) -> Respelled:
    """Write the workbook ``book`` to ``out`` with every call of ``functions`` spelled one way.

    Cells, names, tables, conditional formats and validations are searched; what a spreadsheet program has put before a
    name (``_xll.``, ``[1]!`` and the like) goes, ``@`` stays. ``out`` is :func:`respelled_out` if None; with ``in_place``
    the workbook itself, of which ``NAME.bak`` is kept. Raises :class:`BookError` (one line) if anything prevents it.
    """
    book = Path(book)
    if in_place and out is not None:
        raise BookError(f"either --in-place or an output file ({out}) can be given, not both")
    target = book if in_place else respelled_out(book, to) if out is None else Path(out)
    if book.is_file():
        check_target(book, target, in_place=in_place)
    spelling = Spelling(functions)
    calls = formulas = elsewhere = 0
    unknown: set[str] = set()
    changed: dict[str, bytes] = {}
    with Archive(book) as archive:
        mark = fingerprint(book)
        read_parts(archive)  # refuses whatever is no workbook
        names = [info.filename for info in archive.infos if info.filename.lower().endswith(".xml")]
        for index, name in enumerate(names):
            if progress is not None:
                progress(f"reading {name}", index / len(names))
            content = archive.read(name)
            if not _FAMILY.search(content):
                continue
            edits: list[tuple[int, int, bytes]] = []
            for text in formula_texts(content, book, name):
                found = list(_edits(text, spelling, to, unknown))
                edits += found
                calls += len(found)
                if found:
                    formulas, elsewhere = formulas + name.startswith(_SHEETS), elsewhere + (not name.startswith(_SHEETS))
            if edits:
                changed[name] = _edited(content, edits)

        def write(file: IO[bytes]) -> None:
            archive.copy(file, changed)

        backup = place(book, mark, target, write, in_place=in_place) if changed or not in_place else None
    return Respelled(
        book, to, calls, formulas, elsewhere, tuple(sorted(unknown)), target if changed or not in_place else None, backup
    )


def respelled_out(book: Path, to: To) -> Path:
    """``STEM.dotted.xlsx`` or ``STEM.underscored.xlsx`` beside the workbook."""
    return book.with_name(f"{book.stem}.{to}{kind_of(book)}")


def spelled(name: str, to: To) -> str:
    """A canonical name in one of the spellings."""
    return name if to == "dotted" else name.replace(".", "_")


def _edits(text: FormulaText, spelling: Spelling, to: To, unknown: set[str]) -> Iterator[tuple[int, int, bytes]]:
    """Start, end and new bytes of each name to be changed."""
    for match in _PIECES.finditer(text.text):
        name = match["call"]
        if name is None:
            continue
        canonical = spelling.canonical(name)
        if canonical is None:
            if spelling.is_misspelt(name):
                unknown.add(name)
            continue
        new = spelled(canonical, to)
        if name != new:
            start, end = text.span(match.start("call"), match.end("call"))
            yield start, end, new.encode()


def _edited(content: bytes, edits: Sequence[tuple[int, int, bytes]]) -> bytes:
    pieces: list[bytes] = []
    done = 0
    for start, end, new in edits:
        pieces += (content[done:start], new)
        done = end
    pieces.append(content[done:])
    return b"".join(pieces)


def respell_summary(done: Respelled) -> list[str]:
    """Plain lines, the main result first."""
    shown = spelled("INGLE.PEAK", done.to)
    if done.calls:
        where = f"{count(done.formulas, 'formula')} of sheets"
        if done.elsewhere:
            where += f" and {done.elsewhere:,} elsewhere (names, tables, formats, rules)"
        verb = "is" if done.calls == 1 else "are"
        lines = [f"{count(done.calls, 'Ingle call')} {verb} now spelled as in {shown}, in {where}; the values are as they were."]
    else:
        lines = [f"Every Ingle call is spelled as in {shown} already; nothing was changed."]
    if done.unknown:
        lines.append(f"Not a function of Ingle, and left: {', '.join(done.unknown)}.")
    if done.backup is not None:
        lines.append(f"The workbook as it was is kept in {done.backup}.")
    if done.out is not None:
        lines.append(f"Written to {done.out}.")
    return lines
