"""LibreOffice Calc without a window, as the other opinion on ordinary formulas."""

from __future__ import annotations

import re
import shutil
import subprocess
import zipfile
from pathlib import Path

import openpyxl
from book_samples import rewritten
from ingle_addin.cells import CellError

OFFICE = shutil.which("soffice")
_VALUE = re.compile(rb"(<c [^>]*?)(?: t=\"[a-zA-Z]+\")?((?: [a-z]+=\"[^\"]*\")*>(?:<f[^>]*/>|<f[^>]*>[^<]*</f>))<v>[^<]*</v>")


def without_stored_values(book: Path, out: Path) -> Path:
    """A copy in which no formula has a value, so that whoever opens it must compute."""

    def change(name: str, content: bytes) -> bytes:
        return _VALUE.sub(rb"\1\2", content) if name.startswith("xl/worksheets/sheet") else content

    return rewritten(book, out, change)


def recalculated(book: Path, folder: Path) -> dict[str, dict[str, object]]:
    """Sheet -> cell -> value after Calc has loaded, computed and saved a workbook; empty cells are left out."""
    assert OFFICE is not None
    profile = f"-env:UserInstallation={(folder / 'profile').as_uri()}"
    bare = without_stored_values(book, folder / "bare.xlsx")
    command = [
        OFFICE,
        profile,
        "--headless",
        "--convert-to",
        "xlsx:Calc MS Excel 2007 XML",
        "--outdir",
        str(folder / "calc"),
        str(bare),
    ]
    subprocess.run(command, check=True, timeout=300, capture_output=True)
    return values_of(folder / "calc" / "bare.xlsx")


def values_of(book: Path) -> dict[str, dict[str, object]]:
    """Sheet -> cell -> stored value, errors as such; a truth value is told from a number."""
    with zipfile.ZipFile(book) as archive:
        assert archive.testzip() is None
    pages = openpyxl.load_workbook(book, data_only=True)
    return {
        page.title: {
            cell.coordinate: CellError(cell.value) if cell.data_type == "e" and cell.value in _ERRORS else cell.value
            for row in page.iter_rows()
            for cell in row
            if cell.value is not None
        }
        for page in pages.worksheets
    }


_ERRORS = {error.value for error in CellError}
