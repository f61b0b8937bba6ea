"""The parts of a workbook beside its sheets: which sheets there are, names, tables, shared texts, date formats."""

from __future__ import annotations

import posixpath
import re
from dataclasses import dataclass, field
from urllib.parse import unquote

from ingle_addin.book.archive import Archive
from ingle_addin.book.errors import BookError
from ingle_addin.book.markup import SEPARATOR, feed, main_name, parser, unescape
from ingle_addin.book.refs import Rect, parse_rect

_PACKAGE_RELATIONS = "_rels/.rels"
MAX_CELL_CHARACTERS = 32_767
# What a cell's text may grow to inside the file, where escapes and formulas stand beside it.
MAX_RAW = 8 * MAX_CELL_CHARACTERS
# Numbers of the built-in formats that show a date or a time of day.
_DATE_FORMATS = frozenset({*range(14, 23), *range(27, 37), *range(45, 48), *range(50, 59)})
_NOT_FORMAT = re.compile(r'"[^"]*"|\\.|_.|\*.|\[(?![hms]+\])[^\]]*\]', re.IGNORECASE)


@dataclass(frozen=True)
class SheetPart:
    """A worksheet: its name and the part that holds it."""

    name: str
    part: str


@dataclass(frozen=True)
class DefinedName:
    """A name of the workbook (``scope`` None) or of one sheet (its index among the worksheets)."""

    name: str
    scope: int | None
    text: str


@dataclass(frozen=True)
class Table:
    """A table of a sheet: ``rect`` includes its heading and total rows."""

    name: str
    sheet: int
    rect: Rect
    headings: int
    totals: int
    columns: tuple[str, ...]


@dataclass
class Parts:
    """All that the sheets need to be understood."""

    sheets: list[SheetPart] = field(default_factory=list)
    names: list[DefinedName] = field(default_factory=list)
    tables: list[Table] = field(default_factory=list)
    texts: list[str] = field(default_factory=list)
    date_styles: frozenset[int] = frozenset()
    date1904: bool = False
    displayed_precision: bool = False


def read_parts(archive: Archive) -> Parts:
    """Read everything but the cells. Raises :class:`BookError` for a file that is not an .xlsx or .xlsm workbook."""
    workbook = _workbook_part(archive)
    relations = _relations(archive, workbook)
    parts = Parts()
    _read_workbook(archive, workbook, relations, parts)
    for kind, target in relations.values():
        if kind == "sharedStrings" and target in archive:
            parts.texts = _read_texts(archive, target)
        elif kind == "styles" and target in archive:
            parts.date_styles = _read_date_styles(archive, target)
    for index, sheet in enumerate(parts.sheets):
        for kind, target in _relations(archive, sheet.part).values():
            if kind == "table" and target in archive:
                parts.tables.append(_read_table(archive, target, index))
    return parts


def _workbook_part(archive: Archive) -> str:
    path = archive.path
    if _PACKAGE_RELATIONS not in archive:
        if "content.xml" in archive or "mimetype" in archive:
            raise BookError(f"{path} is an OpenDocument file; open it in the spreadsheet program and save it as .xlsx")
        raise BookError(f"{path} is a zip file but not a workbook; name an .xlsx or .xlsm file")
    for kind, target in _relations(archive, "").values():
        if kind == "officeDocument":
            if target.lower().endswith(".bin"):
                raise BookError(f"{path} is a binary .xlsb workbook; open it in the spreadsheet program and save it as .xlsx")
            if target in archive:
                return target
            raise BookError(f"{path} lacks the part {target}; open it in the spreadsheet program and save it anew")
    raise BookError(f"{path} is a zip file but not a workbook; name an .xlsx or .xlsm file")


def _relations(archive: Archive, part: str) -> dict[str, tuple[str, str]]:
    """Relation id -> (last word of its type, part it points to), external targets left out."""
    folder, name = posixpath.split(part)
    file = posixpath.join(folder, "_rels", name + ".rels")
    if file not in archive:
        return {}
    found: dict[str, tuple[str, str]] = {}

    def start(element: str, attributes: dict[str, str]) -> None:
        if element.rpartition(SEPARATOR)[2] != "Relationship" or attributes.get("TargetMode") == "External":
            return
        target = unquote(attributes.get("Target", ""))
        full = target.lstrip("/") if target.startswith("/") else posixpath.normpath(posixpath.join(folder, target))
        found[attributes.get("Id", "")] = (attributes.get("Type", "").rpartition("/")[2], full)

    made = parser(archive.path, file)
    made.StartElementHandler = start
    feed(made, archive.stream(file), archive.path, file)
    return found


def _read_workbook(archive: Archive, part: str, relations: dict[str, tuple[str, str]], parts: Parts) -> None:
    listed: list[tuple[str, str]] = []
    names: list[tuple[str, str | None, str]] = []
    pieces: list[str] = []
    current: list[dict[str, str]] = []

    def start(element: str, attributes: dict[str, str]) -> None:
        name = main_name(element)
        if name == "sheet":
            relation = next((v for k, v in attributes.items() if k.endswith(SEPARATOR + "id")), "")
            listed.append((unescape(attributes.get("name", "")), relation))
        elif name == "definedName":
            current.append(attributes)
            pieces.clear()
        elif name == "workbookPr":
            parts.date1904 = attributes.get("date1904", "0") in ("1", "true")
        elif name == "calcPr":
            parts.displayed_precision = attributes.get("fullPrecision", "1") in ("0", "false")

    def end(element: str) -> None:
        if current and main_name(element) == "definedName":
            attributes = current.pop()
            names.append((attributes.get("name", ""), attributes.get("localSheetId"), "".join(pieces)))

    def text(data: str) -> None:
        if current:
            pieces.append(data)

    made = parser(archive.path, part)
    made.StartElementHandler, made.EndElementHandler, made.CharacterDataHandler = start, end, text
    feed(made, archive.stream(part), archive.path, part)
    # Names count charts and dialogs among the sheets; here only sheets with cells have a number.
    positions: dict[int, int] = {}
    for position, (name, relation) in enumerate(listed):
        kind, target = relations.get(relation, ("", ""))
        if kind == "worksheet":
            if target not in archive:
                raise BookError(f"{archive.path} lacks the part {target}; open it in the spreadsheet program and save it anew")
            positions[position] = len(parts.sheets)
            parts.sheets.append(SheetPart(name, target))
    if not parts.sheets:
        raise BookError(f"{archive.path} has no worksheet")
    for name, local, content in names:
        if local is None:
            parts.names.append(DefinedName(name, None, content))
        elif local.isdecimal() and len(local) < 6 and int(local) in positions:
            parts.names.append(DefinedName(name, positions[int(local)], content))


def _read_texts(archive: Archive, part: str) -> list[str]:
    texts: list[str] = []
    pieces: list[str] = []
    state = {"text": False, "phonetic": 0}

    def start(element: str, _attributes: dict[str, str]) -> None:
        name = main_name(element)
        if name == "si":
            pieces.clear()
        elif name == "rPh":
            state["phonetic"] += 1
        elif name == "t":
            state["text"] = not state["phonetic"]

    def end(element: str) -> None:
        name = main_name(element)
        if name == "si":
            text = "".join(pieces)
            if len(text) > MAX_RAW:
                raise BookError(f"{archive.path}: a cell holds more than {MAX_CELL_CHARACTERS:,} characters; shorten it")
            texts.append(unescape(text))
        elif name == "rPh":
            state["phonetic"] -= 1
        elif name == "t":
            state["text"] = False

    def characters(data: str) -> None:
        if state["text"]:
            pieces.append(data)

    made = parser(archive.path, part)
    made.StartElementHandler, made.EndElementHandler, made.CharacterDataHandler = start, end, characters
    feed(made, archive.stream(part), archive.path, part)
    return texts


def is_date_format(code: str) -> bool:
    """Whether a number format shows a date or a time (quoted text, colours and conditions do not count)."""
    return bool(re.search("[dmyhs]", _NOT_FORMAT.sub("", code.partition(";")[0]), re.IGNORECASE))


def _read_date_styles(archive: Archive, part: str) -> frozenset[int]:
    custom: dict[str, str] = {}
    formats: list[str] = []
    inside: list[bool] = []

    def start(element: str, attributes: dict[str, str]) -> None:
        name = main_name(element)
        if name == "numFmt":
            custom[attributes.get("numFmtId", "")] = attributes.get("formatCode", "")
        elif name == "cellXfs":
            inside.append(True)
        elif name == "xf" and inside:
            formats.append(attributes.get("numFmtId", "0"))

    def end(element: str) -> None:
        if main_name(element) == "cellXfs":
            inside.clear()

    made = parser(archive.path, part)
    made.StartElementHandler, made.EndElementHandler = start, end
    feed(made, archive.stream(part), archive.path, part)
    found = set()
    for index, number in enumerate(formats):
        if number in custom:
            if is_date_format(custom[number]):
                found.add(index)
        elif number.isdecimal() and int(number) in _DATE_FORMATS:
            found.add(index)
    return frozenset(found)


def _read_table(archive: Archive, part: str, sheet: int) -> Table:
    head: dict[str, str] = {}
    columns: list[str] = []

    def start(element: str, attributes: dict[str, str]) -> None:
        name = main_name(element)
        if name == "table":
            head.update(attributes)
        elif name == "tableColumn":
            columns.append(unescape(attributes.get("name", "")))

    made = parser(archive.path, part)
    made.StartElementHandler = start
    feed(made, archive.stream(part), archive.path, part)
    rect = parse_rect(head.get("ref", ""))
    rows = [head.get("headerRowCount", "1"), head.get("totalsRowCount", "0")]
    if rect is None or not all(text.isdecimal() and len(text) < 8 for text in rows):
        raise BookError(f"{archive.path} is damaged in its part {part}; open it in the spreadsheet program and save it anew")
    return Table(
        name=head.get("displayName", head.get("name", "")),
        sheet=sheet,
        rect=rect,
        headings=int(rows[0]),
        totals=int(rows[1]),
        columns=tuple(columns),
    )
