"""A headless LibreOffice Calc with Ingle in a profile of its own, for the tests: `with office(folder) as calc: calc.values(...)`.

The office's API is in the system's Python alone, so a second process (calc_driver.py) speaks to it; every method of its
Driver can be called here by name. Profile, shared extensions and home lie in the folder given.
"""

from __future__ import annotations

import json
import os
import shutil
import subprocess
import sys
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any

from ingle_addin.calc.extension import build

_NO_SETTINGS = '<?xml version="1.0" encoding="UTF-8"?>\n<oor:items xmlns:oor="http://openoffice.org/2001/registry"></oor:items>\n'
SYSTEM_PYTHON = "/usr/bin/python3"


def _missing() -> str:
    if shutil.which("soffice") is None or shutil.which("unopkg") is None:
        return "LibreOffice Calc is not installed"
    tried = subprocess.run([SYSTEM_PYTHON, "-c", "import uno"], capture_output=True, check=False)
    return "" if tried.returncode == 0 else "the office's Python interface (python3-uno) is not installed"


MISSING = _missing()


class CellErrorText(str):
    """An error as a cell shows it."""

    __slots__ = ()


class Office:
    """One running Calc."""

    def __init__(self, driver: subprocess.Popen[str], folder: Path) -> None:
        self._driver, self.folder = driver, folder
        self._reply()

    def __getattr__(self, name: str) -> Any:
        return lambda *args: self._call(name, *args)

    def _call(self, name: str, *args: Any) -> Any:
        assert self._driver.stdin is not None
        self._driver.stdin.write(json.dumps([name, *args]) + "\n")
        self._driver.stdin.flush()
        return self._reply()

    def _reply(self) -> Any:
        assert self._driver.stdout is not None
        line = self._driver.stdout.readline()
        assert line, "the driver of Calc has ended"
        reply = json.loads(line)
        assert "failed" not in reply, reply["failed"]
        return reply["answer"]

    def values(self, *args: Any) -> list[list[Any]]:
        """Values of a block, errors marked."""
        rows = self._call("values", *args)
        return [[CellErrorText(cell["error"]) if isinstance(cell, dict) else cell for cell in row] for row in rows]


def arguments(folder: Path) -> list[str]:
    """What office and package manager are both told, so that everything stays in the folder."""
    shared = folder / "shared"
    shared.mkdir(parents=True, exist_ok=True)
    return [f"-env:UserInstallation={(folder / 'profile').as_uri()}", f"-env:UNO_SHARED_PACKAGES_CACHE={shared.as_uri()}"]


def environment(folder: Path) -> dict[str, str]:
    """The home directory lies in the folder too; our own paths are no business of the office."""
    kept = {name: value for name, value in os.environ.items() if not name.startswith("PYTHON")}
    return {**kept, "HOME": str(folder), "XDG_CONFIG_HOME": str(folder / "config")}


def install(folder: Path, extension: Path) -> None:
    """Put an extension into the folder's profile."""
    shared = ["--shared"] if os.geteuid() == 0 else []  # root has no user extensions
    command = ["unopkg", "add", "-f", "-s", *shared, str(extension), *arguments(folder)]
    subprocess.run(command, check=True, stdin=subprocess.DEVNULL, capture_output=True, timeout=180, env=environment(folder))


@contextmanager
def office(folder: Path, settings: str = "") -> Iterator[Office]:
    """Calc with this tree's extension; ``settings`` are registry items of the profile.

    The worker's Python is a link in the folder, so that a test can take it away.
    """
    folder.mkdir(exist_ok=True)
    python = folder / "python"
    python.symlink_to(sys.executable)
    install(folder, build(folder / "ingle.oxt", python=str(python)))
    if settings:
        registry = folder / "profile" / "user" / "registrymodifications.xcu"
        known = registry.read_text(encoding="utf-8") if registry.exists() else _NO_SETTINGS
        registry.parent.mkdir(parents=True, exist_ok=True)
        registry.write_text(known.replace("</oor:items>", settings + "</oor:items>"), encoding="utf-8")
    with running(folder) as calc:
        yield calc


@contextmanager
def running(folder: Path) -> Iterator[Office]:
    """Calc on the folder's profile as it is."""
    program = Path(str(shutil.which("soffice"))).resolve().parent / "soffice.bin"
    command = [SYSTEM_PYTHON, str(Path(__file__).with_name("calc_driver.py")), str(program), *arguments(folder)]
    driver = subprocess.Popen(command, stdin=subprocess.PIPE, stdout=subprocess.PIPE, text=True, env=environment(folder))
    try:
        calc = Office(driver, folder)
        yield calc
        calc.quit()
    finally:
        driver.communicate(timeout=60)  # closes both pipes; a driver that reads no more commands ends the office
