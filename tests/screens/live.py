"""Pictures of Calc with Ingle in it. Run by hand: python tests/screens/live.py [--out FOLDER] [--display :97]

The shipped workbook recalculated by Calc itself, the function wizard on INGLE.PEAK, the menu, an explained cell, an inserted
table. Needs what shoot.py needs, and the office's extension manager. Calc gets a screen and a profile of its own.
"""

from __future__ import annotations

import argparse
import shutil
import sys
import tempfile
import time
from pathlib import Path

from shoot import HERE, SETTINGS, Environment, _go, _keys, _picture, _run, opened

sys.path.insert(0, str(HERE.parent))
import calc_office
from ingle_addin.calc.extension import build

# Where the menu `Ingle` stands in the window's menu bar, in the screen's points.
MENU = (384, 9)
TABLES, EXPLAIN = (440, 28), (440, 45)  # two of its entries, as the menu is open
CANCEL = (1080, 692)  # of the wizard, which without a window manager has no keyboard


def shoot(book: Path, out: Path, display: str) -> None:
    """Install Ingle, open a copy of the workbook, and save the pictures."""
    with tempfile.TemporaryDirectory(ignore_cleanup_errors=True) as scratch:
        folder = Path(scratch)
        user = folder / "profile" / "user"
        user.mkdir(parents=True)
        (user / "registrymodifications.xcu").write_text(SETTINGS, encoding="utf-8")
        calc_office.install(folder, build(folder / "ingle.oxt"))
        copy = Path(shutil.copy(book, folder / book.name))
        calc = ["soffice", *calc_office.arguments(folder), "--norestore", "--nologo", "--calc"]
        environment = {**calc_office.environment(folder), "DISPLAY": display, "SAL_USE_VCLPLUGIN": "gen"}
        with opened(calc, copy, environment):
            _keys(environment, "ctrl+shift+F9")
            time.sleep(8)
            _go(environment, "AF13")
            for _ in range(11):
                _keys(environment, "Right")
            _picture(environment, out / "calc-live.png")
            _go(environment, "AF10")
            _keys(environment, "ctrl+F2")
            time.sleep(3)
            _part(environment, out / "calc-wizard.png", "1300x760+200+0")
            _click(environment, *CANCEL)
            _go(environment, "AF35")
            _move(environment, *MENU)
            _run(environment, "xdotool", "mousedown", "1")
            _move(environment, *EXPLAIN)
            _run(environment, "xdotool", "mouseup", "1")
            _move(environment, *TABLES)
            _move(environment, TABLES[0] + 9, TABLES[1])
            _part(environment, out / "calc-menu.png", "1100x420+0+0")
            _click(environment, *EXPLAIN)
            time.sleep(2)
            _part(environment, out / "calc-explain.png", "1100x860+350+120")
            _keys(environment, "Return")


def _part(environment: Environment, path: Path, part: str) -> None:
    """A picture of a part of the screen: width, height and corner."""
    _picture(environment, path)
    _run(environment, "convert", str(path), "-crop", part, "+repage", f"PNG8:{path}")


def _click(environment: Environment, x: int, y: int) -> None:
    _move(environment, x, y)
    _run(environment, "xdotool", "click", "1")
    time.sleep(1)


def _move(environment: Environment, x: int, y: int) -> None:
    _run(environment, "xdotool", "mousemove", str(x), str(y))
    time.sleep(1)


def main() -> None:
    parser = argparse.ArgumentParser(description="Take pictures of Ingle in LibreOffice Calc.")
    parser.add_argument("--book", type=Path, default=HERE.parents[1] / "workbooks" / "busbars.xlsx")
    parser.add_argument("--out", type=Path, default=HERE)
    parser.add_argument("--display", default=":98")
    given = parser.parse_args()
    given.out.mkdir(parents=True, exist_ok=True)
    shoot(given.book, given.out, given.display)


if __name__ == "__main__":
    main()
