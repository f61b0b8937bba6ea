"""Checks Ingle in Calc step by step: the office, the extension, the worker, and a cell computed in Calc itself."""

from __future__ import annotations

import csv
import json
import tempfile
from collections.abc import Iterator
from pathlib import Path

from ingle_addin.about import about, version
from ingle_addin.calc.extension import SETTINGS
from ingle_addin.calc.inside.client import Client, WorkerError
from ingle_addin.calc.install import RESTART
from ingle_addin.calc.office import Extension, Office, OfficeError, find
from ingle_addin.findings import Finding

_INSTALL = "run: ingle install calc"
# A wall with both faces held: its peak is T + qL²/8k.
_HEADINGS = ("shape", "thickness [mm]", "conductivity [W/(m·K)]", "generation [W/m³]", "both held [°C]")
_VALUES = ("wall", 20.0, 2.0, 1e5, 20.0)
_PEAK = 20.0 + 1e5 * 0.02**2 / (8.0 * 2.0)


def findings(folder: Path | None = None, profile: Path | None = None) -> Iterator[Finding]:
    """What is found, in the order in which one rests on the other; stops where nothing more can be told."""
    try:
        office = find(folder, profile)
        told = office.version()
    except OfficeError as error:
        yield Finding("LibreOffice", "not found", str(error))
        return
    old = bool(told) and int(told.split(".")[0]) < 7
    yield Finding("LibreOffice", f"{told} in {office.program}", "install LibreOffice 7.0 or newer" if old else "")
    if office.lacks_python:
        remedy = "install the package python3-uno (Debian, Ubuntu) or libreoffice-pyuno (Fedora)"
        yield Finding("its Python", "missing", remedy)
        return
    try:
        extension = office.extension()
    except OfficeError as error:
        yield Finding("extension", "cannot be listed", str(error))
        return
    if extension is None:
        yield Finding("extension", "not installed", _INSTALL)
        return
    same = extension.version == version()
    said = f"version {extension.version}" if same else f"version {extension.version}, but Ingle here is {version()}"
    yield Finding("extension", said, "" if same else _INSTALL)
    worker = _worker(extension)
    yield worker
    if worker.good:
        yield _in_calc(office)


def _worker(extension: Extension) -> Finding:
    """Start the worker as the extension does, and let it compute."""
    try:
        assert extension.folder is not None
        settings = json.loads((extension.folder / SETTINGS).read_text(encoding="utf-8"))
    except (AssertionError, OSError, ValueError):
        return Finding("worker", "the extension's settings cannot be read", _INSTALL)
    client = Client(settings["command"], settings["seconds"])
    try:
        name, _ = client.ask(("hello",))
        rows = client.ask(("INGLE.PEAK", ((_HEADINGS,), (_VALUES,)), False))
    except WorkerError as error:
        said, _, remedy = str(error).partition("; ")
        return Finding("worker", said, remedy or _INSTALL)
    finally:
        client.close()
    python = settings["command"][0]
    if name != about():
        return Finding("worker", f"{python} holds {name}, but this is {about()}", _INSTALL)
    if not isinstance(rows, tuple) or rows[0][0] != _PEAK:
        return Finding("worker", f"{python} answers {rows!r} where {_PEAK} is right", "install Ingle again, then " + _INSTALL)
    return Finding("worker", f"{name} in {python}")


def _in_calc(office: Office) -> Finding:
    """Compute a workbook's cell in a headless Calc of the same profile."""
    what = "a cell in Calc"
    if office.is_open:
        return Finding(what, "not tried, since LibreOffice is open; close it and run this again to try")
    from openpyxl import Workbook

    with tempfile.TemporaryDirectory() as folder:
        book = Workbook()
        sheet = book.active
        assert sheet is not None
        sheet.append(_HEADINGS)
        sheet.append(_VALUES)
        sheet["A3"] = "=INGLE.PEAK(A1:E1,A2:E2)"
        sheet["A4"] = "=INGLE.WHY(A1:E1,A2:E2)"
        path = Path(folder) / "sample.xlsx"
        book.save(path)
        text = "csv:Text - txt - csv (StarCalc):44,34,76,1,,0,false,false,false"
        try:
            done = office.run(office.soffice, "--headless", "--norestore", "--convert-to", text, "--outdir", folder, str(path))
            rows = list(csv.reader(path.with_suffix(".csv").read_text(encoding="utf-8").splitlines()))
        except OSError:
            last = (done.stderr.strip().splitlines() or ["no reason was given"])[-1]
            return Finding(what, f"no answer from LibreOffice: {last}", f"{RESTART}, then run this again")
        except OfficeError as error:
            return Finding(what, "no answer", str(error))
    peak, why = rows[2][0], rows[3][0]
    if peak == str(_PEAK):
        return Finding(what, f"INGLE.PEAK answers {peak}, as it should")
    return Finding(what, f"INGLE.PEAK answers {peak} where {_PEAK} is right; INGLE.WHY: {why}", f"{_INSTALL}; then {RESTART}")
