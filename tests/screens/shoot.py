"""Pictures of the filled workbook in LibreOffice Calc. Run by hand: python tests/screens/shoot.py [--all] [--live]

Needs soffice, Xvfb, xdotool and ImageMagick (import, convert). Calc gets a screen and a profile of its own, both thrown away.

A Calc without the Ingle functions computes array formulas and errors anew on loading and shows #NAME? there. The pictures are
of the values that `ingle fill` wrote, so a copy is opened in which the Ingle formulas are left out and their values stay;
with --live the workbook is opened as it is.
"""

from __future__ import annotations

import argparse
import os
import re
import shutil
import subprocess
import tempfile
import time
import zipfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

HERE = Path(__file__).resolve().parent
WIDTH, HEIGHT = 1800, 980
LARGEST = 300_000  # bytes of a picture
# What would otherwise lie over the sheet on a first start.
SETTINGS = """<?xml version="1.0" encoding="UTF-8"?>
<oor:items xmlns:oor="http://openoffice.org/2001/registry">
<item oor:path="/org.openoffice.Office.Common/Misc"><prop oor:name="ShowTipOfTheDay"><value>false</value></prop></item>
<item oor:path="/org.openoffice.Setup/Product"><prop oor:name="ooSetupLastVersion"><value>99</value></prop></item>
<item oor:path="/org.openoffice.Office.Common/Misc"><prop oor:name="FirstRun"><value>false</value></prop></item>
</oor:items>
"""
# A picture: its name, how many sheets to go on first, the cells to go to (or arrow keys) in turn, and whether the tree keeps it.
VIEWS: tuple[tuple[str, int, tuple[str, ...], bool], ...] = (
    ("inputs", 0, ("A9",), False),
    ("calc", 0, ("AF13", *["Right"] * 11), True),
    ("profile", 1, ("B7",), True),
    ("summary", 1, ("A7",), False),
    ("chart", 0, ("A80", "A20"), False),
    ("assumptions", 1, ("A7",), False),
)
_INGLE = re.compile(rb"<f\b[^>]*>[^<]*INGLE\.[^<]*</f>")

Environment = dict[str, str]


def shoot(book: Path, out: Path, display: str, *, live: bool, every: bool) -> None:
    """Open a copy of the workbook and save a picture of each view."""
    with tempfile.TemporaryDirectory(ignore_cleanup_errors=True) as scratch:
        folder = Path(scratch)
        profile = folder / "profile" / "user"
        profile.mkdir(parents=True)
        (profile / "registrymodifications.xcu").write_text(SETTINGS, encoding="utf-8")
        copy = folder / book.name
        shutil.copy(book, copy) if live else _values_only(book, copy)
        calc = ["soffice", f"-env:UserInstallation={(folder / 'profile').as_uri()}", "--norestore", "--nologo", "--calc"]
        environment = {**os.environ, "DISPLAY": display, "HOME": scratch, "SAL_USE_VCLPLUGIN": "gen"}
        with opened(calc, copy, environment):
            for name, sheets, cells, kept in VIEWS:
                for _ in range(sheets):
                    _keys(environment, "ctrl+Next")
                for cell in cells:
                    _keys(environment, cell) if cell == "Right" else _go(environment, cell)
                if kept or every:
                    _picture(environment, out / f"{book.stem}-{name}.png")


@contextmanager
def opened(calc: list[str], book: Path, environment: Environment) -> Iterator[None]:
    """A workbook in a Calc that fills a screen of its own."""
    # A new profile ends the first start at once; this one is spent on that.
    subprocess.run([*calc, "--headless", "--terminate_after_init"], env=environment, check=False, capture_output=True)
    with _running(["Xvfb", environment["DISPLAY"], "-screen", "0", f"{WIDTH}x{HEIGHT}x24"], environment):
        time.sleep(2)
        with _running([*calc, str(book)], environment):
            window = _window(book.name, environment)
            _run(environment, "xdotool", "windowmove", window, "0", "0", "windowsize", window, str(WIDTH), str(HEIGHT))
            _run(environment, "xdotool", "windowfocus", window)
            time.sleep(4)
            yield


def _values_only(book: Path, copy: Path) -> None:
    with zipfile.ZipFile(book) as old, zipfile.ZipFile(copy, "w", zipfile.ZIP_DEFLATED) as new:
        for name in old.namelist():
            part = old.read(name)
            new.writestr(name, _INGLE.sub(b"", part) if name.startswith("xl/worksheets/sheet") else part)


@contextmanager
def _running(command: list[str], environment: Environment) -> Iterator[None]:
    """A program that is ended with the block."""
    process = subprocess.Popen(command, env=environment, start_new_session=True, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL)
    try:
        yield
    finally:
        os.killpg(process.pid, 15)  # its own group and no other: the office is started by a script
        process.wait(30)


def _run(environment: Environment, *command: str, check: bool = True) -> str:
    return subprocess.run(command, env=environment, check=check, capture_output=True, text=True).stdout


def _window(name: str, environment: Environment) -> str:
    for _ in range(60):
        found = _run(environment, "xdotool", "search", "--onlyvisible", "--name", name, check=False).split()
        if found:
            return found[0]
        time.sleep(1)
    raise SystemExit(f"{name} did not open within a minute")


def _keys(environment: Environment, *keys: str) -> None:
    _run(environment, "xdotool", "key", *keys)
    time.sleep(1.0)


def _go(environment: Environment, cell: str) -> None:
    """Go to a cell by the name box."""
    _keys(environment, "ctrl+shift+t")
    _keys(environment, "ctrl+a")
    _run(environment, "xdotool", "type", cell)
    _keys(environment, "Return")


def _picture(environment: Environment, path: Path) -> None:
    time.sleep(1)
    _run(environment, "import", "-window", "root", "-strip", "+dither", "-colors", "240", "-depth", "8", f"PNG8:{path}")
    size = path.stat().st_size
    if size > LARGEST:
        raise SystemExit(f"{path} has {size:,} bytes, more than {LARGEST:,}")
    print(f"{path}: {size:,} bytes")


def main() -> None:
    parser = argparse.ArgumentParser(description="Take pictures of a workbook in LibreOffice Calc.")
    parser.add_argument("--book", type=Path, default=HERE.parents[1] / "workbooks" / "busbars.xlsx")
    parser.add_argument("--out", type=Path, default=HERE)
    parser.add_argument("--display", default=":97")
    parser.add_argument("--live", action="store_true", help="open the workbook itself, Ingle formulas and all")
    parser.add_argument("--all", action="store_true", help="all views, also those not kept in the tree")
    given = parser.parse_args()
    given.out.mkdir(parents=True, exist_ok=True)
    shoot(given.book, given.out, given.display, live=given.live, every=given.all)


if __name__ == "__main__":
    main()
