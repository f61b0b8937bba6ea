"""The commands of the menu. Each says in a dialog what it did, or why it could not; called quietly, it only returns that."""

from __future__ import annotations

import sys
from typing import Any
from urllib.parse import parse_qs, urlsplit

from com.sun.star.awt.FontWeight import BOLD
from com.sun.star.awt.MessageBoxType import ERRORBOX, INFOBOX

from ingle_addin.calc.inside.calls import NoCallError, call_behind
from ingle_addin.calc.inside.client import Client, WorkerError

_OK_BUTTON = 1


class RefusedError(Exception):
    """A command that cannot be carried out; the text says why and what to do."""


def carry_out(context: Any, frame: Any, client: Client, settings: dict[str, Any], command: str, args: Any) -> str:
    """Carry out one command on the frame's document; what it says, and shows unless an argument ``Quiet`` is true."""
    quiet = any(each.Name == "Quiet" and each.Value for each in args)
    parts = urlsplit(command)
    wanted = {name: values[0] for name, values in parse_qs(parts.query).items()}
    kind = INFOBOX
    try:
        document = frame.Controller.Model if frame is not None else None
        if document is None or not hasattr(document, "Sheets"):
            raise RefusedError("Open a spreadsheet first.")
        work = _COMMANDS.get(parts.path)
        if work is None:
            raise RefusedError(f"Ingle has no command {parts.path}.")
        said = work(document, client, settings, wanted)
    except (RefusedError, NoCallError, WorkerError) as error:
        kind, said = ERRORBOX, str(error)
    if not quiet and said:
        _show(context, frame, kind, said)
    return said


def _show(context: Any, frame: Any, kind: Any, said: str) -> None:
    toolkit = context.ServiceManager.createInstanceWithContext("com.sun.star.awt.Toolkit", context)
    box = toolkit.createMessageBox(frame.ContainerWindow, kind, _OK_BUTTON, "Ingle", said)
    box.execute()
    box.dispose()


def insert(document: Any, client: Client, settings: dict[str, Any], wanted: dict[str, str]) -> str:  # noqa: ARG001
    """Headings, an example row and answer formulas of a shape, from the selected cell on; only into empty cells."""
    table = settings["tables"].get(wanted.get("shape", ""))
    if table is None:
        raise RefusedError(f"Ingle has no case table for '{wanted.get('shape', '')}'; choose one from the menu.")
    headings, values, answers = table
    top, left, sheet = _selected(document)
    right = left + len(headings) + len(answers) - 1
    try:
        block = sheet.getCellRangeByPosition(left, top, right, top + 1)
    except Exception:  # the office's own exceptions know no common ancestor
        raise RefusedError("The table does not fit here; choose a cell further to the left.") from None
    name = block.AbsoluteName.split(".")[-1].replace("$", "")
    if any(text for row in block.getFormulaArray() for text in row):
        raise RefusedError(f"The cells {name} are not all empty; choose an empty place for the table.")
    inputs = sheet.getCellRangeByPosition(left, top, left + len(headings) - 1, top + 1)
    first, last = (edge.split("$")[1] for edge in inputs.AbsoluteName.split(".")[-1].split(":"))
    ranges = {
        "headings": f"${first}${top + 1}:${last}${top + 1}",
        "values": f"${first}{top + 2}:${last}{top + 2}",  # the row moves when the formulas are filled down
    }
    undo = document.UndoManager
    undo.enterUndoContext("Insert a case table")
    try:
        # Cell by cell, for only so can the user take it back.
        for number, heading in enumerate([*headings, *(heading for heading, _ in answers)]):
            sheet.getCellByPosition(left + number, top).setString(heading)
        for number, value in enumerate(values):
            cell = sheet.getCellByPosition(left + number, top + 1)
            if isinstance(value, str):
                cell.setString(value)
            elif value is not None:
                cell.setValue(value)
        for number, (_, formula) in enumerate(answers, left + len(headings)):
            column = sheet.getCellByPosition(number, top).AbsoluteName.split("$")[-2]
            sheet.getCellByPosition(number, top + 1).setFormula("=" + formula.format(here=f"{column}${top + 1}", **ranges))
        head = sheet.getCellRangeByPosition(left, top, right, top)
        head.CharWeight, head.IsTextWrapped = BOLD, True
        head.Rows.OptimalHeight = True
    finally:
        undo.leaveUndoContext()
    return f"A case table is in {name}. Its row is an invented example: type your own values, and fill the formulas down."


def explain(document: Any, client: Client, settings: dict[str, Any], wanted: dict[str, str]) -> str:  # noqa: ARG001
    """What INGLE.WHY says of the row behind the selected cell, and the row's filled headings."""
    top, left, sheet = _selected(document)
    call = call_behind(document, sheet, left, top)
    answer = client.ask(("explain", call.name, call.args, call.row))
    if isinstance(answer, str):
        raise RefusedError(answer)
    pairs, why = answer
    lines = [f"{call.cell}  {call.name}", "", why[:1].upper() + why[1:], ""]
    return "\n".join([*lines, *(f"{heading} = {value}" for heading, value in pairs)]).rstrip()


def recalculate(document: Any, client: Client, settings: dict[str, Any], wanted: dict[str, str]) -> str:  # noqa: ARG001
    """Compute the document's cells anew, with a worker that may have failed before."""
    client.forget()
    client.ask(("hello",))
    document.calculateAll()
    return "All cells are calculated anew."


def about(document: Any, client: Client, settings: dict[str, Any], wanted: dict[str, str]) -> str:  # noqa: ARG001
    """Versions of all that takes part, and the caution that belongs to every answer."""
    try:
        worker, process = client.ask(("hello",))
    except WorkerError as error:
        worker, process = str(error), 0
    python = ".".join(map(str, sys.version_info[:3]))
    lines = [
        f"{worker}, process {process}" if process else worker,
        f"Extension {settings['version']}, in the office's Python {python}",
    ]
    return "\n".join([*lines, "", settings["caution"]])


def _selected(document: Any) -> tuple[int, int, Any]:
    """Row and column (from 0) of the first selected cell, and its sheet."""
    chosen = document.CurrentSelection
    if hasattr(chosen, "RangeAddresses") and chosen.RangeAddresses:
        address = chosen.RangeAddresses[0]
    elif hasattr(chosen, "RangeAddress"):
        address = chosen.RangeAddress
    else:
        raise RefusedError("Select a cell first.")
    return address.StartRow, address.StartColumn, document.Sheets.getByIndex(address.Sheet)


_COMMANDS = {"insert": insert, "explain": explain, "recalculate": recalculate, "about": about}
