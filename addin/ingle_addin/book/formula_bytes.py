"""Where in the bytes of a part its formulas stand, letter by letter."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from pathlib import Path

from ingle_addin.book.markup import SEPARATOR, feed, parser

# Elements that hold a formula: of cells, names, conditional formats, validations and tables, of charts and extensions.
_HOLDERS = frozenset(["f", "formula", "formula1", "formula2", "definedName", "calculatedColumnFormula", "totalsRowFormula"])


@dataclass
class FormulaText:
    """A formula as it reads, in pieces: each with its place in the text and its place in the bytes."""

    pieces: list[tuple[str, int, bool]] = field(default_factory=list)  # text, first byte, whether written as it reads
    ends: list[int] = field(default_factory=list)

    @property
    def text(self) -> str:
        """The whole formula, references to characters resolved."""
        return "".join(text for text, _, _ in self.pieces)

    def span(self, start: int, end: int) -> tuple[int, int]:
        """The bytes that letters ``start`` to ``end`` of the text are written with."""
        return self._byte(start), self._byte(end - 1, after=True)

    def _byte(self, letter: int, *, after: bool = False) -> int:
        for (text, first, plain), end in zip(self.pieces, self.ends, strict=True):
            if letter < len(text):
                if plain:
                    return first + len(text[: letter + after].encode())
                return end if after else first
            letter -= len(text)
        raise IndexError(letter)


def formula_texts(content: bytes, path: Path, part: str) -> Iterator[FormulaText]:
    """Every formula of a part, in order. Raises :class:`BookError` for what is not well-formed."""
    found: list[FormulaText] = []
    state = {"inside": False, "literal": False}
    made = parser(path, part)
    made.buffer_text = False  # each piece then is either written as it reads, or is one reference such as &amp;

    def start(element: str, _attributes: object) -> None:
        state["inside"] = element.rpartition(SEPARATOR)[2] in _HOLDERS
        if state["inside"]:
            found.append(FormulaText())

    def end(_element: str) -> None:
        state["inside"] = False

    def text(data: str) -> None:
        if not state["inside"]:
            return
        at = made.CurrentByteIndex
        raw = data.encode()
        # An ampersand stands for itself only in a CDATA section.
        plain = content.startswith(raw, at) and (data != "&" or state["literal"])
        found[-1].pieces.append((data, at, plain))
        found[-1].ends.append(at + len(raw) if plain else content.find(b";", at) + 1)

    def literal() -> None:
        state["literal"] = True

    def literal_end() -> None:
        state["literal"] = False

    made.StartCdataSectionHandler, made.EndCdataSectionHandler = literal, literal_end
    made.StartElementHandler, made.EndElementHandler, made.CharacterDataHandler = start, end, text
    feed(made, [content], path, part)
    return iter(found)
