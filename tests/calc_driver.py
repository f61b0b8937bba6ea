"""Drives one headless LibreOffice Calc over its API, one JSON command a line. Run by the office's Python (see calc_office.py)."""

from __future__ import annotations

import contextlib
import json
import subprocess
import sys
import time
import uuid
from typing import Any

import uno
from com.sun.star.beans import PropertyValue
from com.sun.star.connection import NoConnectException

_ERRORS = 4  # com.sun.star.sheet.FormulaResult.ERROR
FILTERS = {"xlsx": "Calc MS Excel 2007 XML", "ods": "calc8"}


def properties(**values: Any) -> tuple[PropertyValue, ...]:
    found = []
    for name, value in values.items():
        item = PropertyValue()
        item.Name, item.Value = name, value
        found.append(item)
    return tuple(found)


class Driver:
    def __init__(self, soffice: str, environment: list[str]) -> None:
        pipe = "ingle" + uuid.uuid4().hex
        accept = f"--accept=pipe,name={pipe};urp;StarOffice.ComponentContext"
        command = [soffice, "--headless", "--invisible", "--norestore", "--nologo", "--nodefault", "--nolockcheck",
                   "--nofirststartwizard", accept, *environment]  # fmt: skip
        local = uno.getComponentContext()
        resolver = local.ServiceManager.createInstanceWithContext("com.sun.star.bridge.UnoUrlResolver", local)
        self.process = subprocess.Popen(command, stdin=subprocess.DEVNULL, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL)
        end, again = time.monotonic() + 120.0, 0
        while True:
            try:
                self.context = resolver.resolve(f"uno:pipe,name={pipe};urp;StarOffice.ComponentContext")
                break
            except NoConnectException:
                code = self.process.poll()
                if code == 81 and again < 3:  # a new profile asks to be started again
                    again += 1
                    self.process = subprocess.Popen(
                        command, stdin=subprocess.DEVNULL, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL
                    )
                elif code is not None or time.monotonic() > end:
                    raise
                time.sleep(0.05)
        create = self.context.ServiceManager.createInstanceWithContext
        self.desktop = create("com.sun.star.frame.Desktop", self.context)
        self.dispatcher = create("com.sun.star.frame.DispatchHelper", self.context)
        self.documents: list[Any] = []

    def pid(self) -> int:
        return self.process.pid

    def open(self, path: str) -> int:
        url = "private:factory/scalc" if path == "new" else uno.systemPathToFileUrl(path)
        document = self.desktop.loadComponentFromURL(url, "_blank", 0, properties(Hidden=True))
        if document is None:
            raise RuntimeError(f"{path} was not opened")
        self.documents.append(document)
        return len(self.documents) - 1

    def close(self, number: int) -> None:
        self.documents[number].close(True)

    def calculate(self, number: int) -> float:
        """Recalculate everything; how many seconds it took."""
        start = time.perf_counter()
        self.documents[number].calculateAll()
        return time.perf_counter() - start

    def set(self, number: int, sheet: str, at: str, value: Any) -> None:
        cell = self._range(number, sheet, at).getCellByPosition(0, 0)
        if isinstance(value, str):
            cell.Formula = value
        else:
            cell.Value = value

    def fill(self, number: int, sheet: str, at: str, rows: list[list[Any]]) -> float:
        """Put formulas and constants into a block of cells; how many seconds it took with what it makes Calc compute."""
        start = time.perf_counter()
        self._range(number, sheet, at).setFormulaArray(tuple(tuple(row) for row in rows))
        return time.perf_counter() - start

    def array(self, number: int, sheet: str, at: str, formula: str) -> float:
        start = time.perf_counter()
        self._range(number, sheet, at).setArrayFormula(formula)
        return time.perf_counter() - start

    def copy_down(self, number: int, sheet: str, at: str) -> float:
        """Fill the first row's formulas down the block."""
        start = time.perf_counter()
        self._range(number, sheet, at).fillAuto(uno.Enum("com.sun.star.sheet.FillDirection", "TO_BOTTOM"), 1)
        return time.perf_counter() - start

    def values(self, number: int, sheet: str, at: str) -> list[list[Any]]:
        """The values of a block; an error as the text that the cell shows."""
        block = self._range(number, sheet, at)
        rows = [list(row) for row in block.getDataArray()]
        corner = block.RangeAddress
        for place in block.queryFormulaCells(_ERRORS).RangeAddresses:
            for i in range(place.StartRow - corner.StartRow, place.EndRow - corner.StartRow + 1):
                for j in range(place.StartColumn - corner.StartColumn, place.EndColumn - corner.StartColumn + 1):
                    rows[i][j] = {"error": block.getCellByPosition(j, i).String}
        return rows

    def formulas(self, number: int, sheet: str, at: str) -> list[list[str]]:
        return [list(row) for row in self._range(number, sheet, at).getFormulaArray()]

    def local_formulas(self, number: int, sheet: str, at: str) -> list[str]:
        """Formulas of a column of cells as the user sees them."""
        block = self._range(number, sheet, at)
        return [block.getCellByPosition(0, row).FormulaLocal for row in range(block.Rows.Count)]

    def sheets(self, number: int) -> list[str]:
        return list(self.documents[number].Sheets.ElementNames)

    def used(self, number: int, sheet: str) -> list[int]:
        """Rows and columns of the used area."""
        cursor = self.documents[number].Sheets.getByName(sheet).createCursor()
        cursor.gotoEndOfUsedArea(False)
        return [cursor.RangeAddress.EndRow + 1, cursor.RangeAddress.EndColumn + 1]

    def save(self, number: int, path: str) -> None:
        kind = path.rsplit(".", 1)[1]
        self.documents[number].storeToURL(uno.systemPathToFileUrl(path), properties(FilterName=FILTERS[kind], Overwrite=True))

    def dispatch(self, number: int, sheet: str, at: str, command: str, quiet: bool = True) -> str:
        """Carry out a command with a cell selected; what it says."""
        controller = self.documents[number].CurrentController
        controller.select(self._range(number, sheet, at))
        event = self.dispatcher.executeDispatch(controller.Frame, command, "", 0, properties(Quiet=quiet))
        return str(getattr(event, "Result", event))

    def undo(self, number: int) -> str:
        """Undo the last action; its title."""
        manager = self.documents[number].UndoManager
        title = manager.getCurrentUndoActionTitle()
        manager.undo()
        return str(title)

    def add_sheet(self, number: int, name: str) -> None:
        self.documents[number].Sheets.insertNewByName(name, 9)

    def described(self, name: str) -> dict[str, Any]:
        """What the function wizard knows of a function."""
        create = self.context.ServiceManager.createInstanceWithContext
        found = create("com.sun.star.sheet.FunctionDescriptions", self.context).getByName(name)
        got = {item.Name: item.Value for item in found}
        return {
            "description": got["Description"],
            "arguments": [[a.Name, a.Description, a.IsOptional] for a in got["Arguments"] or ()],
        }

    def quit(self) -> int:
        for document in self.documents:
            try:
                document.close(True)
            except Exception:  # closed before
                continue
        with contextlib.suppress(Exception):  # the connection ends with the office
            self.desktop.terminate()
        return self.process.wait(60)

    def _range(self, number: int, sheet: str, at: str) -> Any:
        return self.documents[number].Sheets.getByName(sheet).getCellRangeByName(at)


def main() -> None:
    soffice, *environment = sys.argv[1:]
    driver = Driver(soffice, environment)
    print(json.dumps({"answer": None}), flush=True)
    for line in sys.stdin:
        name, *args = json.loads(line)
        try:
            reply = {"answer": getattr(driver, name)(*args)}
        except Exception as error:
            reply = {"failed": f"{type(error).__name__}: {error}"}
        print(json.dumps(reply), flush=True)
        if name == "quit":
            break
    if driver.process.poll() is None:
        driver.process.kill()
        driver.process.wait()


if __name__ == "__main__":
    main()
