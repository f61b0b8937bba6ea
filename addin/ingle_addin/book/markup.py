"""One guarded way to read XML: no document types, UTF-8 only, namespaces resolved, fed in pieces."""

from __future__ import annotations

import re
from collections.abc import Iterable
from pathlib import Path
from xml.parsers import expat

from ingle_addin.book.errors import BookError

# Elements arrive as "namespace}name"; the separator cannot occur in either.
SEPARATOR = "}"
MAIN_NAMESPACES = (
    "http://schemas.openxmlformats.org/spreadsheetml/2006/main",
    "http://purl.oclc.org/ooxml/spreadsheetml/main",  # the strict variant of the standard
)
_ESCAPE = re.compile(r"_x([0-9A-Fa-f]{4})_")


class _RefusedError(Exception):
    pass


def parser(path: Path, part: str) -> expat.XMLParserType:
    """An expat parser that refuses a document type and any encoding but UTF-8."""
    made = expat.ParserCreate(namespace_separator=SEPARATOR)
    made.buffer_text = True
    made.buffer_size = 1 << 16
    made.ordered_attributes = False

    def doctype(*_: object) -> None:
        raise _RefusedError(f"{path}: the part {part} declares a document type, which no workbook needs; not opened")

    def declaration(_version: str, encoding: str | None, _standalone: int) -> None:
        if encoding is not None and encoding.lower() not in ("utf-8", "utf8", "us-ascii", "ascii"):
            raise _RefusedError(f"{path}: the part {part} is written in {encoding}, not UTF-8; open it and save it anew")

    made.StartDoctypeDeclHandler = doctype
    made.XmlDeclHandler = declaration
    return made


def feed(made: expat.XMLParserType, chunks: Iterable[bytes], path: Path, part: str) -> None:
    """Parse ``chunks`` to the end; :class:`BookError` for what is not well-formed."""
    first = True
    try:
        for chunk in chunks:
            if first and chunk[:2] in (b"\xff\xfe", b"\xfe\xff", b"<\x00", b"\x00<"):
                raise _RefusedError(f"{path}: the part {part} is written in UTF-16, not UTF-8; open it and save it anew")
            first = False
            made.Parse(chunk, False)
        made.Parse(b"", True)
    except _RefusedError as refusal:
        raise BookError(str(refusal)) from None
    except expat.ExpatError:
        raise BookError(f"{path} is damaged in its part {part}; open it in the spreadsheet program and save it anew") from None


def main_name(name: str) -> str | None:
    """The bare name of an element of the spreadsheet namespace, else None."""
    namespace, _, bare = name.rpartition(SEPARATOR)
    return bare if namespace in MAIN_NAMESPACES else None


def unescape(text: str) -> str:
    """``_xHHHH_`` back to its character: workbooks write so what XML cannot hold."""
    if "_x" not in text:
        return text
    plain = _ESCAPE.sub(lambda match: chr(int(match[1], 16)), text)
    # Two halves of one character may each have been escaped; a half alone cannot be written anywhere.
    return plain if plain.isprintable() else plain.encode("utf-16-le", "surrogatepass").decode("utf-16-le", "replace")


def escape(text: str) -> str:
    """Text for an XML element, control characters and look-alike escapes written as ``_xHHHH_``."""
    text = _ESCAPE.sub(lambda match: "_x005F" + match[0], text)
    text = text.replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;")
    return _FORBIDDEN.sub(lambda match: f"_x{ord(match[0]):04X}_", text)


# Lone surrogates and the two non-characters cannot stand in XML either.
_FORBIDDEN = re.compile("[\x00-\x08\x0b-\x0d\x0e-\x1f\ud800-\udfff\ufffe\uffff]")
