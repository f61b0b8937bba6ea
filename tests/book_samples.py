"""Workbooks for the tests of ``ingle_addin.book``, and a stand-in for the evaluator that only adds numbers."""

from __future__ import annotations

import io
import warnings
import zipfile
from collections.abc import Callable, Mapping, Sequence
from pathlib import Path
from typing import Any

import xlsxwriter
from ingle_addin.book import Report, fill
from ingle_addin.calls import Outcome
from ingle_addin.cells import Cell, CellError, Grid

FUNCTIONS = ("INGLE.PEAK", "INGLE.FACE", "INGLE.ASK", "INGLE.WHY")
MAIN = "http://schemas.openxmlformats.org/spreadsheetml/2006/main"
RELATIONS = "http://schemas.openxmlformats.org/officeDocument/2006/relationships"

SHEETS = "application/vnd.openxmlformats-officedocument.spreadsheetml"


def number(value: Cell) -> float:
    """Numbers count, all else does not."""
    return value if isinstance(value, float) else 0.0


class Solver:
    """Answers the sum of all number cells of all arguments; ``INGLE.ASK`` one row a row of its last argument: the sum and
    the count. A row with an error cell answers that error. Keeps every call it was asked."""

    def __init__(self) -> None:
        self.asked: list[tuple[str, tuple[Grid, ...]]] = []
        self.batches: list[tuple[str, int]] = []

    def __call__(self, name: str, calls: Sequence[Sequence[Grid]]) -> list[Outcome]:
        self.batches.append((name, len(calls)))
        self.asked += [(name, tuple(call)) for call in calls]
        return [self.one(name, call) for call in calls]

    def one(self, name: str, call: Sequence[Grid]) -> Outcome:
        if name == "INGLE.ASK":
            rows = [self.line(list(row)) for row in call[-1]]
            return Outcome([row for row, _ in rows], [reason for _, reason in rows])
        row, reason = self.line([value for grid in call for row in grid for value in row])
        return Outcome((row[:1],), [reason])

    @staticmethod
    def line(cells: list[Cell]) -> tuple[list[Cell], str | None]:
        error = next((each for each in cells if isinstance(each, CellError)), None)
        if error is not None:
            return [error, error], f"a cell holds {error}"
        return [sum(map(number, cells)), float(len(cells))], None

    @property
    def last(self) -> tuple[Grid, ...]:
        return self.asked[-1][1]


def made(path: Path, build: Callable[[Any, Any], None], sheet: str = "Data", **options: object) -> Path:
    """A workbook with one sheet, which ``build(workbook, worksheet)`` fills."""
    book = xlsxwriter.Workbook(str(path), options)
    build(book, book.add_worksheet(sheet))
    book.close()
    return path


def with_cells(path: Path, cells: Mapping[str, object], sheet: str = "Data") -> Path:
    """A workbook whose cells are given by name; text that begins with ``=`` is a formula (stored value 0)."""

    def build(_book: Any, page: Any) -> None:
        for name, value in cells.items():
            page.write(name, value)

    return made(path, build, sheet)


def parts_of(path: Path) -> dict[str, bytes]:
    """The parts of a workbook in their order."""
    with zipfile.ZipFile(path) as archive:
        return {info.filename: archive.read(info) for info in archive.infolist()}


def rewritten(source: Path, target: Path, change: Callable[[str, bytes], bytes | None]) -> Path:
    """A copy with changed parts; None leaves a part out."""
    with zipfile.ZipFile(target, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, content in parts_of(source).items():
            new = change(name, content)
            if new is not None:
                archive.writestr(name, new)
    return target


def with_sheet_xml(path: Path, data: str, *, names: str = "", prefix: str = "", encoding: str = "UTF-8", head: str = "") -> Path:
    """The smallest workbook around a hand-written ``<sheetData>`` content."""
    colon = f"{prefix}:" if prefix else ""
    space = f'xmlns:{prefix}="{MAIN}"' if prefix else f'xmlns="{MAIN}"'
    sheet = (
        f'<?xml version="1.0" encoding="{encoding}"?>{head}<{colon}worksheet {space}>'
        f"<{colon}sheetData>{data}</{colon}sheetData></{colon}worksheet>"
    )
    kinds = "http://schemas.openxmlformats.org/package/2006"
    parts = {
        "[Content_Types].xml": f'<Types xmlns="{kinds}/content-types"><Default Extension="xml" ContentType="application/xml"/>'
        '<Default Extension="rels" ContentType="application/vnd.openxmlformats-package.relationships+xml"/>'
        f'<Override PartName="/xl/workbook.xml" ContentType="{SHEETS}.sheet.main+xml"/>'
        f'<Override PartName="/xl/worksheets/sheet1.xml" ContentType="{SHEETS}.worksheet+xml"/></Types>',
        "_rels/.rels": f'<Relationships xmlns="{kinds}/relationships"><Relationship Id="r1" '
        f'Type="{RELATIONS}/officeDocument" Target="xl/workbook.xml"/></Relationships>',
        "xl/workbook.xml": f'<workbook xmlns="{MAIN}" xmlns:r="{RELATIONS}"><sheets><sheet name="Data" sheetId="1" r:id="r1"/>'
        f"</sheets>{names}</workbook>",
        "xl/_rels/workbook.xml.rels": f'<Relationships xmlns="{kinds}/relationships"><Relationship Id="r1" '
        f'Type="{RELATIONS}/worksheet" Target="worksheets/sheet1.xml"/></Relationships>',
        "xl/worksheets/sheet1.xml": sheet,
    }
    with zipfile.ZipFile(path, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, content in parts.items():
            archive.writestr(name, content.encode(encoding))
    return path


def sheet_xml(path: Path, number: int = 1) -> str:
    """The text of a worksheet part."""
    return parts_of(path)[f"xl/worksheets/sheet{number}.xml"].decode()


def shown(path: Path, sheet: str = "Data") -> dict[str, object]:
    """The stored values of a filled workbook, read by an independent library (empty cells left out)."""
    import openpyxl

    with warnings.catch_warnings():
        warnings.simplefilter("ignore", UserWarning)  # openpyxl says of every extension that it would lose it
        book = openpyxl.load_workbook(io.BytesIO(path.read_bytes()), data_only=True)
    return {cell.coordinate: cell.value for row in book[sheet].iter_rows() for cell in row if cell.value is not None}


def filled(book: Path, solver: Solver | None = None, **options: Any) -> tuple[dict[str, object], Report, Solver]:
    """Fill a workbook; return the values in it, the report, and the solver that was asked."""
    solver = solver or Solver()
    out = book.with_name("out.xlsx")
    report = fill(book, out, functions=FUNCTIONS, solve=solver, **options)
    return shown(out), report, solver
