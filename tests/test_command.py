"""The `ingle` command as it is typed: what it prints, what it writes, and the code it leaves with."""

from __future__ import annotations

import contextlib
import io
import math
import os
import subprocess
import sys
import sysconfig
from dataclasses import dataclass
from importlib.metadata import version
from pathlib import Path

import pytest
import sheets
from ingle_addin.command import app as command
from ingle_addin.command.reference import asked, signature, spelled
from ingle_addin.functions import FUNCTIONS
from ingle_addin.headings import ANSWERS, INPUTS

INGLE = str(Path(sysconfig.get_path("scripts")) / "ingle")
HEADINGS = ["shape", "thickness [mm]", "conductivity [W/(m·K)]", "generation [W/m³]", "both film [W/(m²·K)]", "both fluid [°C]"]
CASE = ["wall", 10.0, 15.0, 3e5, 400.0, 20.0]
PEAK = 24.0  # fluid + q L/(2 h) + q L²/(8 k) = 20 + 3.75 + 0.25
TYPED = "; ".join(f"{heading} = {value}" for heading, value in zip(HEADINGS, CASE, strict=True))


@dataclass(frozen=True)
class Ran:
    code: int
    out: list[str]
    err: list[str]


def run(*arguments: str, folder: Path | None = None, width: int = 200) -> Ran:
    """The installed command in a process of its own."""
    environment = {**os.environ, "COLUMNS": str(width), "PYTHONUTF8": "1", "NO_COLOR": "1"}
    done = subprocess.run([INGLE, *arguments], cwd=folder, env=environment, capture_output=True, encoding="utf-8", timeout=60)
    return Ran(done.returncode, done.stdout.splitlines(), done.stderr.splitlines())


def typed(folder: Path, *arguments: str) -> Ran:
    """The same within this process, which need not load the libraries anew for each of many."""
    out, err = io.StringIO(), io.StringIO()
    with contextlib.chdir(folder), contextlib.redirect_stdout(out), contextlib.redirect_stderr(err):
        code = command.run(list(arguments))
    return Ran(code, out.getvalue().splitlines(), err.getvalue().splitlines())


def state(folder: Path) -> dict[str, bytes | None]:
    """Every file below a folder with what it holds, and every folder."""
    return {str(path.relative_to(folder)): path.read_bytes() if path.is_file() else None for path in sorted(folder.rglob("*"))}


def book(path: Path, second: object = 10.0) -> Path:
    """Two rows with PEAK and WHY, and their mean; the second row may be bad."""
    cells: dict[str, object] = {}
    sheets.put(cells, "A1", [HEADINGS, CASE, [CASE[0], second, *CASE[2:]]])
    for row in (2, 3):
        cells |= {f"H{row}": f"=INGLE.PEAK($A$1:$F$1,A{row}:F{row})", f"I{row}": f"=INGLE.WHY($A$1:$F$1,A{row}:F{row})"}
    cells["H5"] = "=AVERAGE(H2:H3)"
    return sheets.write_book(path, cells)


# Help.

HELP = [(), ("fill",), ("check",), ("respell",), ("ask",), ("reference",), ("doctor",), ("install", "calc")]


@pytest.fixture(scope="module")
def helped() -> dict[tuple[str, ...], Ran]:
    return {words: run(*words, "--help") for words in HELP}


@pytest.mark.parametrize("words", HELP)
def test_help_of_each_command_has_an_example(helped: dict[tuple[str, ...], Ran], words: tuple[str, ...]) -> None:
    ran = helped[words]
    text = " ".join(" ".join(ran.out).split())
    example = f"Example: ingle {words[0]}" if words else "Begin with: ingle fill workbooks/busbars.xlsx"
    assert (ran.code, ran.err) == (0, [])
    assert example in text
    assert text.startswith(" ".join(("Usage: ingle", *words, "[OPTIONS]")))


def test_help_lists_every_command_with_its_help(helped: dict[tuple[str, ...], Ran]) -> None:
    lines = helped[()].out
    start = lines.index("Commands:") + 1
    listed = [line.split()[0] for line in lines[start : lines.index("", start)]]
    assert listed == [words[0] for words in HELP if words]


def test_the_example_of_ask_can_be_typed(tmp_path: Path, helped: dict[tuple[str, ...], Ran]) -> None:
    text = " ".join(" ".join(helped["ask",].out).split())
    answers, case = text.partition('Example: ingle ask "')[2].removesuffix('"').split('" "')
    ran = typed(tmp_path, "ask", answers, case)
    assert (ran.code, ran.err) == (0, [])
    assert [line.split()[-1] for line in ran.out] == ["868.3974", "ok"]  # 35 + q L/2h + q L²/8k, q = 2 W/cm³


def test_ingle_alone_says_how_to_begin() -> None:
    assert run() == Ran(0, [
        "Ingle fills workbooks whose cells ask how hot self-heating parts get.",
        "  ingle fill BOOK.xlsx    computes a workbook into BOOK.filled.xlsx",
        "  ingle check BOOK.xlsx   compares a workbook with its stored values",
        "  ingle ask ANSWERS CASE  answers one case here",
        "  ingle install calc      puts the functions into LibreOffice Calc",
        "  ingle doctor            says what is wrong with that",
        "  ingle reference         lists all headings and functions",
        "  ingle --help            lists all commands",
    ], [])  # fmt: skip


def test_version() -> None:
    assert run("--version") == Ran(0, [f"Ingle {version('ingle')}"], [])


@pytest.mark.parametrize("arguments", [["--help"], ["fill", "--help"], []])
def test_help_waits_for_no_heavy_library(arguments: list[str]) -> None:
    code = f"import sys; from ingle_addin.command.app import run; run({arguments}); print(sorted(set(sys.modules) & "\
        "{'numpy', 'scipy', 'pint', 'openpyxl', 'ironcalc', 'ingle'}))"  # fmt: skip
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, encoding="utf-8", timeout=60, check=True)
    assert done.stdout.splitlines()[-1] == "[]"


# ask

TABLE = TYPED.replace("= 15.0", "= 20:16.2; 500:21.5")
# ∫ k dT from the faces, at 23.75, to the peak is q L²/8. By the table k = K + C (T − 20), and rise x has Kx + Cx²/2 of it.
C, K = 5.3 / 480.0, 16.2 + 3.75 * 5.3 / 480.0
TABLE_PEAK = 23.75 + (math.sqrt(K * K + 2.0 * C * 3.75) - K) / C
TABLE_HELD_PEAK = 23.75 + 3.75 / 21.5  # above the table's last point k is held
ASKED = {
    ("peak [°C]", TYPED): ["peak [°C]  24"],
    ("peak [K]; verdict; why", TYPED): ["peak [K]  297.15", "verdict   no limit", "why       ok"],
    # A piece without = belongs to the value before it.
    ("peak [°C]", TABLE): [f"peak [°C]  {TABLE_PEAK:.7g}"],
    ("why", TABLE): ["why  ok"],
    ("peak [°C]", TABLE.replace("20:16.2", "20:16,2")): [
        "peak [°C]  #VALUE!",
        "Conductivity [W/(m·K)] in this row has '20:16,2' in its table; write points as temperature:value, 20:16.2",
    ],
    ("peak [°C]; verdict; why", TABLE.replace("500:", "22:")): [
        f"peak [°C]  {TABLE_HELD_PEAK:.7g}",
        "verdict    caution",
        "why        Conductivity [W/(m·K)] in this row has a table that does not reach the body's temperatures; its end value is "
        "held there, so extend it",
    ],
    ("peak [°C];", TYPED): ["peak [°C]  24"],  # a ; left at the end asks nothing more
    ("why", TYPED + "; limit [°C] = 23"): [
        "why  Limit [°C] in this row is 23, and the peak is above it; lower the source or cool the body more"
    ],
    ("peak [°C]", "shape = ; thickness [mm] = 3"): [
        "peak [°C]  #N/A",
        "Shape in this row is blank; write wall, cylinder, sphere or bar",
    ],
    ("peak [°C]", TYPED.replace("= 3", "= -3")): ["peak [°C]  16.25", "Generation [W/m³] in this row is negative, so the body takes "
                                                 "heat up; make it positive if it heats itself"],
    ("peek [°C]", TYPED): ["peek [°C]  #VALUE!", "Heading 'peek [°C]': no answer has this name; did you mean 'peak'?"],
    ("peak [°C]; mean [mm]", TYPED): ["peak [°C]  24", "mean [mm]  #VALUE!", "Heading 'mean [mm]': 'mm' is a length, but a "
                                      "temperature belongs here; write for example [°C]"],
}  # fmt: skip


@pytest.mark.parametrize("asked", ASKED)
def test_ask(tmp_path: Path, asked: tuple[str, str]) -> None:
    assert typed(tmp_path, "ask", *asked) == Ran(0, ASKED[asked], [])


# reference


def test_reference_lists_every_heading_and_function() -> None:
    ran = run("reference", width=400)
    assert (ran.code, ran.err) == (0, [])
    names = {line.split("  ")[0].rstrip() for line in ran.out}
    expected = {spelled(item.name, item.where) for item in INPUTS} | {asked(item) for item in ANSWERS}
    expected |= {signature(function) for function in FUNCTIONS}
    assert expected - names == set()
    heads = {"INPUT HEADINGS", "ANSWER HEADINGS", "FUNCTIONS", "heading", "function", ""}
    assert names - expected - heads == set(ran.out[-6:-3]) | set(ran.out[-2:])
    assert ran.out[-2:] == [
        "Results are estimates of steady one-dimensional conduction. They do not replace local codes, type tests or the",
        "judgement of a licensed engineer; a part that can burn, overheat a cable or run away needs its own test.",
    ]
    soon = {item.name for item in (*INPUTS, *ANSWERS, *FUNCTIONS) if not item.available}
    lines = [line.rstrip() for line in ran.out]
    late = [line for line in lines if line.endswith("(not available yet)")]
    assert len(late) == sum(not item.available for item in (*INPUTS, *ANSWERS, *FUNCTIONS))
    assert soon


# fill


def test_fill_writes_beside_and_tells(tmp_path: Path) -> None:
    book(tmp_path / "parts.xlsx", -10.0)
    before = (tmp_path / "parts.xlsx").read_bytes()
    assert run("fill", "parts.xlsx", folder=tmp_path) == Ran(0, [
        "4 cells with Ingle formulas and 1 other formula computed; 5 values changed.",
        "1 row without an answer:",
        "  Data!H3 #NUM!: Thickness [mm] in this row is -10; it must be above 0 and at most 1e9; correct the value or the "
        "heading's unit",
        "Written to parts.filled.xlsx.",
    ], [])  # fmt: skip
    assert sorted(path.name for path in tmp_path.iterdir()) == ["parts.filled.xlsx", "parts.xlsx"]
    assert (tmp_path / "parts.xlsx").read_bytes() == before
    assert sheets.read_values(tmp_path / "parts.filled.xlsx")["H2"] == PEAK


def test_fill_to_a_named_file_and_again_changes_nothing(tmp_path: Path) -> None:
    book(tmp_path / "parts.xlsx")
    first = typed(tmp_path, "fill", "parts.xlsx", "-o", "one.xlsx")
    assert first == Ran(
        0, ["4 cells with Ingle formulas and 1 other formula computed; 5 values changed.", "Written to one.xlsx."], []
    )
    again = typed(tmp_path, "fill", "one.xlsx", "--out", "two.xlsx")
    assert again.out[0] == "4 cells with Ingle formulas and 1 other formula computed; 0 values changed."
    assert (tmp_path / "two.xlsx").read_bytes() == (tmp_path / "one.xlsx").read_bytes()


def test_fill_in_place_keeps_the_old_book(tmp_path: Path) -> None:
    path = book(tmp_path / "parts.xlsx")
    before = path.read_bytes()
    assert typed(tmp_path, "fill", "parts.xlsx", "--in-place") == Ran(0, [
        "4 cells with Ingle formulas and 1 other formula computed; 5 values changed.",
        "The workbook as it was is kept in parts.xlsx.bak.",
        "Written to parts.xlsx.",
    ], [])  # fmt: skip
    assert (tmp_path / "parts.xlsx.bak").read_bytes() == before
    assert sheets.read_values(path)["H5"] == PEAK
    assert sorted(each.name for each in tmp_path.iterdir()) == ["parts.xlsx", "parts.xlsx.bak"]


@pytest.mark.parametrize(("second", "code"), [(10.0, 0), (None, 1)])
def test_fill_strict_leaves_with_1_if_a_row_has_no_answer(tmp_path: Path, second: object, code: int) -> None:
    book(tmp_path / "parts.xlsx", second)
    ran = typed(tmp_path, "fill", "parts.xlsx", "--strict")
    assert (ran.code, ran.err) == (code, [])
    assert (tmp_path / "parts.filled.xlsx").is_file()


# What cannot be carried out: 2, one line, nothing written.

USAGE = "see ingle fill --help"
NOT_READ = {
    "fill absent.xlsx": "absent.xlsx does not exist; check the folder and the spelling",
    "fill nowhere/absent.xlsx": "nowhere/absent.xlsx does not exist; check the folder and the spelling",
    "fill folder.xlsx": "folder.xlsx is a folder; name the workbook in it",
    "fill .": ". is a folder; name the workbook in it",
    "fill garbage.xlsx": "garbage.xlsx is not an .xlsx workbook; open it in the spreadsheet program and save it as .xlsx",
    "fill empty.xlsx": "empty.xlsx is empty; take an earlier copy of it",
    "fill cut.xlsx": "cut.xlsx is cut short or damaged; take an earlier copy of it",
    "fill other.zip": "other.zip is a zip file but not a workbook; name an .xlsx or .xlsm file",
    "fill old.xls": "old.xls is an old .xls workbook; open it in the spreadsheet program and save it as .xlsx",
    "fill good.xlsx -o good.xlsx": "good.xlsx is the workbook itself; name another file, or say --in-place to replace it",
    "fill good.xlsx -o ../books/good.xlsx": "../books/good.xlsx is the workbook itself; name another file, or say --in-place to "
    "replace it",
    "fill good.xlsx -o folder.xlsx": "folder.xlsx is a folder; name a file in it",
    "fill good.xlsx -o nowhere/out.xlsx": "the folder nowhere does not exist; make it first",
    "fill good.xlsx --in-place -o out.xlsx": "either --in-place or an output file (out.xlsx) can be given, not both",
    "fill open.xlsx --in-place": "open.xlsx is open in a spreadsheet program; close it there first (or delete .~lock.open.xlsx# if "
    "it is not)",
    "fill good.xlsx -o open.xlsx": "open.xlsx is open in a spreadsheet program; close it there first (or delete .~lock.open.xlsx# "
    "if it is not)",
    "fill good.xlsx -o out.csv": "out.csv does not end in .xlsx; a workbook stays of its own kind, so name it out.xlsx",
    "fill good.xlsx -o out": "out does not end in .xlsx; a workbook stays of its own kind, so name it out.xlsx",
    "fill good.xlsx -o out.xlsm": "out.xlsm does not end in .xlsx; a workbook stays of its own kind, so name it out.xlsx",
    "check absent.xlsx": "absent.xlsx does not exist; check the folder and the spelling",
    "check .": ". is a folder; name the workbook in it",
    "check cut.xlsx": "cut.xlsx is cut short or damaged; take an earlier copy of it",
    "respell absent.xlsx --to dotted": "absent.xlsx does not exist; check the folder and the spelling",
    "respell cut.xlsx --to dotted": "cut.xlsx is cut short or damaged; take an earlier copy of it",
    "respell good.xlsx": "missing option '--to'; see ingle respell --help",
    "respell good.xlsx --to spotted": "--to is spotted; write dotted (INGLE.PEAK) or underscored (INGLE_PEAK)",
    "respell good.xlsx --to dotted -o good.xlsx": "good.xlsx is the workbook itself; name another file, or say --in-place to "
    "replace it",
    "respell good.xlsx --to dotted -o out.csv": "out.csv does not end in .xlsx; a workbook stays of its own kind, so name it "
    "out.xlsx",
    "respell good.xlsx --to dotted --in-place -o out.xlsx": "either --in-place or an output file (out.xlsx) can be given, not both",
    "respell open.xlsx --to dotted --in-place": "open.xlsx is open in a spreadsheet program; close it there first (or delete "
    ".~lock.open.xlsx# if it is not)",
    "fill good.xlsx --zzzzz": f"no such option: --zzzzz; {USAGE}",
    "fill": f"missing argument 'book'; {USAGE}",
    "fill good.xlsx -o": "option '-o' requires an argument; see ingle --help",
    "zzzzz": "no such command 'zzzzz'; see ingle --help",
    "--zzzzz": "no such option: --zzzzz; see ingle --help",
    "ask peak": "missing argument 'case'; see ingle ask --help",
    "ask peak wall": "'wall' has no '='; write the case as 'HEADING = VALUE; HEADING = VALUE'",
    "ask peak ;": "the case is empty; write it as 'HEADING = VALUE; HEADING = VALUE'",
}


@pytest.fixture(scope="module")
def books(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("refused") / "books"
    folder.mkdir()
    good = book(folder / "good.xlsx").read_bytes()
    (folder / "open.xlsx").write_bytes(good)
    (folder / ".~lock.open.xlsx#").write_text(",someone,desk,;")
    (folder / "folder.xlsx").mkdir()
    (folder / "garbage.xlsx").write_bytes(b"\x00\x01 no workbook \xff" * 40)
    (folder / "empty.xlsx").write_bytes(b"")
    (folder / "cut.xlsx").write_bytes(good[: len(good) // 2])
    (folder / "old.xls").write_bytes(bytes.fromhex("D0CF11E0A1B11AE1") + bytes(512))
    empty_zip = b"PK\x05\x06" + bytes(18)
    (folder / "other.zip").write_bytes(empty_zip)
    return folder


@pytest.mark.parametrize("call", NOT_READ)
def test_what_cannot_be_done_leaves_2_one_line_and_nothing_written(books: Path, call: str) -> None:
    before = state(books)
    # A wrong use of the command line is found before anything is loaded, and the help it names is the process's own.
    ran = run(*call.split(), folder=books) if NOT_READ[call].endswith("--help") else typed(books, *call.split())
    assert ran == Ran(2, [], [f"ingle: {NOT_READ[call]}"])
    assert state(books) == before


def test_the_process_itself_leaves_2(tmp_path: Path) -> None:
    (tmp_path / "cut.xlsx").write_bytes(book(tmp_path / "good.xlsx").read_bytes()[:3000])
    before = state(tmp_path)
    assert run("fill", "cut.xlsx", folder=tmp_path) == Ran(2, [], [f"ingle: {NOT_READ['fill cut.xlsx']}"])
    assert state(tmp_path) == before


def test_an_open_book_may_be_read(tmp_path: Path) -> None:
    """Only what is written over must be closed."""
    book(tmp_path / "parts.xlsx")
    (tmp_path / ".~lock.parts.xlsx#").write_text(",someone,desk,;")
    assert typed(tmp_path, "fill", "parts.xlsx").code == 0
    assert sheets.read_values(tmp_path / "parts.filled.xlsx")["H5"] == PEAK
