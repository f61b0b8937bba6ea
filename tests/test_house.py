"""The house: what may lie where, which way imports point, and the names that the interface promises."""

from __future__ import annotations

import ast
import fnmatch
import inspect
import sys
from collections.abc import Iterator
from pathlib import Path
from types import ModuleType
from typing import Any

import ingle
import ingle_addin
import pytest
from ingle_addin.batch import solve_calls
from ingle_addin.cells import CellError
from ingle_addin.functions import FUNCTIONS
from ingle_addin.heading_reader import Asked, Column, read_answer, read_input
from ingle_addin.headings import ANSWERS, INPUTS, Where

ROOT = Path(__file__).parents[1]
LAID_OUT = {"README.md", "DEVELOPERS.md", "pyproject.toml", "addin", "solver", "workbooks", "tests"}
MAY_BE = {"LICENSE"}
MOST_LINES = 450
# The ways to reach the evaluator; what is not one of them is the evaluator and must not know of any.
FRONT_ENDS = ("book", "command", "calc", "excel")


def sources(*folders: str) -> list[Path]:
    return sorted(path for folder in folders for path in (ROOT / folder).rglob("*.py"))


def imports(path: Path) -> Iterator[str]:
    """Full names of the modules a file imports, those inside functions too."""
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            yield from (alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{path.name} imports by a relative name"
            assert node.module is not None
            yield node.module
            yield from (f"{node.module}.{alias.name}" for alias in node.names)


def relative(path: Path) -> str:
    return path.relative_to(ROOT).as_posix()


# Layout.


def test_the_top_of_the_repository_holds_what_is_laid_out() -> None:
    ignored = [line.rstrip("/") for line in (ROOT / ".gitignore").read_text(encoding="utf-8").split()]
    found = {path.name for path in ROOT.iterdir() if not path.name.startswith(".")}
    kept = {name for name in found if not any(fnmatch.fnmatch(name, pattern) for pattern in ignored)}
    assert kept <= LAID_OUT | MAY_BE, "a new name at the top of the repository: its place is inside one of those laid out"
    assert kept >= LAID_OUT


def test_files_stay_short_enough_to_read() -> None:
    lengths = {
        relative(path): len(path.read_text(encoding="utf-8").splitlines())
        for path in sources("solver", "addin", "tests", "workbooks")
    }
    assert len(lengths) > 30
    assert {name: lines for name, lines in lengths.items() if lines >= MOST_LINES} == {}


# Imports.


def test_the_solver_imports_itself_numpy_scipy_and_the_standard_library() -> None:
    for path in sources("solver/ingle"):
        roots = {name.split(".")[0] for name in imports(path)}
        assert roots <= {"ingle", "numpy", "scipy"} | sys.stdlib_module_names, relative(path)


def evaluator() -> list[Path]:
    own = ROOT / "addin" / "ingle_addin"
    return [path for path in sources("addin/ingle_addin") if path.relative_to(own).parts[0].removesuffix(".py") not in FRONT_ENDS]


def test_the_evaluator_knows_no_front_end() -> None:
    files = evaluator()
    names = {path.name for path in files}
    assert {"headings.py", "units.py", "evaluate.py", "recipe.py", "answers.py", "batch.py", "asking.py"} <= names
    for path in files:
        known = {name.split(".")[1] for name in imports(path) if name.startswith("ingle_addin.")}
        assert not known & set(FRONT_ENDS), relative(path)


def test_headings_and_units_know_neither_evaluator_nor_solver() -> None:
    """The table of headings feeds everything and depends on units alone."""
    own = {
        "headings.py": {"units"},
        "units.py": {"unit_spelling", "unit_sizes"},
        "unit_sizes.py": set(),
        "unit_spelling.py": set(),
        "cells.py": set(),
        "functions.py": set(),
    }
    for name, allowed in own.items():
        known = {part for part in imports(ROOT / "addin" / "ingle_addin" / name) if part.split(".")[0] in ("ingle", "ingle_addin")}
        assert {part.split(".")[1] for part in known if part != "ingle_addin"} <= allowed, name
        assert "ingle" not in known, name


def test_front_ends_do_not_import_each_other_but_the_command() -> None:
    """The command offers the others to the terminal; each of those stands alone."""
    for front in ("book", "calc", "excel"):
        for path in sources(f"addin/ingle_addin/{front}"):
            known = {name.split(".")[1] for name in imports(path) if name.startswith("ingle_addin.")}
            assert not known & (set(FRONT_ENDS) - {front}), relative(path)


def test_what_the_package_needs_without_a_workbook_is_little() -> None:
    """Excel's browser runtime has none of openpyxl, typer, rich and IronCalc, so only book and command may load them."""
    for path in evaluator() + sources("solver"):
        roots = {name.split(".")[0] for name in imports(path)}
        assert roots <= {"ingle", "ingle_addin", "numpy", "scipy", "pint"} | sys.stdlib_module_names, relative(path)


# Public names.


def public_names(package: ModuleType) -> set[str]:
    """Names a package holds for others: no modules of its own, nothing it takes from the standard library."""
    assert package.__file__ is not None
    borrowed = set()
    for node in ast.parse(Path(package.__file__).read_text(encoding="utf-8")).body:
        if isinstance(node, ast.ImportFrom) and node.module is not None and node.module.split(".")[0] in sys.stdlib_module_names:
            borrowed |= {alias.asname or alias.name for alias in node.names}
    own = {name for name in vars(package) if not name.startswith("_") and not isinstance(getattr(package, name), ModuleType)}
    return own - borrowed


def test_the_public_names_are_those_announced() -> None:
    assert public_names(ingle) == set(ingle.__all__)
    assert public_names(ingle_addin) <= set(ingle_addin.__all__)  # its one name is loaded when first used
    with pytest.raises(AttributeError, match=r"^module 'ingle_addin' has no attribute 'answer'$"):
        _ = ingle_addin.answer


@pytest.mark.parametrize("package", [ingle, ingle_addin], ids=lambda package: package.__name__)
def test_every_public_function_and_class_is_described(package: ModuleType) -> None:
    described = 0
    for name in package.__all__:
        value = getattr(package, name)
        if inspect.isclass(value) or inspect.isfunction(value):
            text = value.__doc__ or ""
            assert len(text.split()) >= 4, f"{name} has no docstring of its own"
            assert not text.startswith(f"{name}("), f"{name} has only the docstring a dataclass is given"
            described += 1
    assert described
    assert package.__doc__


# Functions and headings.

FUNCTION_NAMES = ["PEAK", "FACE", "ALLOW", "ASK", "PROFILE", "SEEK", "WHY", "FILM", "BLEND", "POINTS", "MATERIAL", "ABOUT"]

# Typed by hand from the interface; a number stands where the interface counts layers or joints.
FACE_INPUTS = ["held", "flux in", "film", "fluid", "emissivity", "surroundings", "resistance", "film law", "size", "speed",
               "fluid kind", "limit"]  # fmt: skip
INPUT_NAMES = [
    "shape", "thickness", "thickness 1", "thickness 2", "inner radius", "inner diameter", "outer radius", "outer radius 2",
    "outer diameter", "outer diameter 2", "radius", "diameter", "length", "width", "area", "section", "perimeter",
    "side film", "side fluid", "side emissivity", "side surroundings", "side film law", "side size", "side speed", "side fluid kind",
    "conductivity", "conductivity 2", "conductivity slope", "conductivity slope 2", "conductivity reference",
    "conductivity reference 2",
    "material", "material 2", "generation", "generation 2", "specific generation", "specific generation 2", "power", "power 2",
    "line power", "line power 2", "current", "current 2", "voltage", "voltage 2", "current density", "current density 2",
    "turns", "turns 2", "fill factor", "fill factor 2", "resistivity", "resistivity 2", "resistivity slope",
    "resistivity reference",
    "ac ratio", "ac ratio 2", "left contact", "right contact", "generation slope", "generation slope 2", "generation reference",
    "activation energy", "activation energy 2", "beam flux", "absorption coefficient", "absorption coefficient 2", "beam enters",
    "joint 1", "joint 2", "limit", "limit 1", "limit 2", "probe", "density", "density 2", "specific heat", "specific heat 2",
    "heat available", "heat available 2", "overload", "start",
    *(f"{side} {name}" for side in ("left", "right", "inner", "outer", "both") for name in FACE_INPUTS),
]  # fmt: skip
SPREADS = [
    "± thickness",
    "+/- thickness",
    "sd thickness",
    "± left film",
    "± both film",
    "sd conductivity 2",
    "± left fluid",
    "sd limit",
]
SOURCES = ["generation", "specific generation", "power", "line power", "current", "current density", "voltage"]
ANSWER_NAMES = [
    "peak", "peak place", "peak layer", "peak 2", "left face", "right face", "inner face", "outer face", "mean", "mean 2",
    "probe temperature", "joint 1 left", "joint 1 right", "left heat out", "right heat out", "inner heat out", "outer heat out",
    "side heat out", "heat made", "left share", "balance", "left film used", "right film used", "voltage", "resistance",
    *(f"allowable {source}" for source in SOURCES), "limited by", "headroom", "utilisation",
    *(f"runaway {source}" for source in SOURCES), "runaway utilisation", "runaway margin",
    "peak low", "peak high", "peak sd", "chance over limit", "main doubt", "doubt share", "allowable low",
    "settling time", "overload time", "verdict", "why",
]  # fmt: skip


def test_the_functions_are_the_twelve() -> None:
    assert [function.name for function in FUNCTIONS] == [f"INGLE.{name}" for name in FUNCTION_NAMES]
    assert [function.underscored for function in FUNCTIONS] == [f"INGLE_{name}" for name in FUNCTION_NAMES]


def base_name(name: str) -> str:
    for prefix in ("± ", "+/- ", "sd "):
        name = name.removeprefix(prefix)
    words = [word for word in name.split() if not word.isdigit()]
    if len(words) > 1 and words[0] in ("left", "right", "inner", "outer", "both", "side") and name not in PLAIN:
        words = words[1:]
    return " ".join(words)


PLAIN = {"inner radius", "inner diameter", "outer radius", "outer radius 2", "outer diameter", "outer diameter 2", "side heat out",
         "left share"}  # fmt: skip


def item_of(name: str, table: tuple[Any, ...]) -> Any:
    (item,) = (item for item in table if item.name == base_name(name))
    return item


def typed(name: str, item: Any) -> str:
    unit = item.kinds[0].unit
    if name.split()[0] in ("±", "+/-", "sd") and unit == "°C":
        unit = "K"
    return f"{name} [{unit}]" if unit else name


@pytest.mark.parametrize("name", INPUT_NAMES + SPREADS)
def test_every_input_of_the_interface_is_read(name: str) -> None:
    column = read_input(typed(name, item_of(name, INPUTS)), 0)
    assert isinstance(column, Column), column
    assert column.item.name == base_name(name)


def joint_or(name: str) -> str:
    return f"joint {name.split()[-1]}" if name.startswith("joint") else name


@pytest.mark.parametrize("name", ANSWER_NAMES)
def test_every_answer_of_the_interface_is_read(name: str) -> None:
    item = item_of(joint_or(name), ANSWERS)
    asked = read_answer(typed(name, item))
    assert isinstance(asked, Asked), asked
    assert asked.item is item


def test_the_tables_hold_no_heading_that_the_interface_does_not_name() -> None:
    assert {base_name(name) for name in INPUT_NAMES} == {item.name for item in INPUTS}
    assert {base_name(joint_or(name)) for name in ANSWER_NAMES} == {item.name for item in ANSWERS}


# What is not there yet says so.

WALL = {"shape": "wall", "thickness [mm]": 10.0, "conductivity [W/(m·K)]": 2.0, "generation [W/m³]": 1e5, "right held [°C]": 20.0}
WAITING_INPUTS = [n for n in INPUT_NAMES + SPREADS if not getattr(read_input(typed(n, item_of(n, INPUTS)), 0), "available", True)]
WAITING_ANSWERS = [item for item in ANSWERS if not item.available]
WAITING_FUNCTIONS = [function for function in FUNCTIONS if not function.available]


@pytest.mark.parametrize("name", WAITING_INPUTS)
def test_an_input_that_is_not_there_yet_is_refused(name: str) -> None:
    heading, item = typed(name, item_of(name, INPUTS)), item_of(name, INPUTS)
    value = item.texts[0] if item.texts else ("copper" if not item.kinds[0].unit else 0.5)
    case = {**WALL, heading: value}
    (found,) = solve_calls("INGLE.PEAK", [((tuple(case),), (tuple(case.values()),))])
    reason = f"{heading} in this row is not available yet; leave it blank or wait for a later version"
    assert [list(row) for row in found.grid] == [[CellError.NA]]
    assert list(found.reasons) == [reason[0].upper() + reason[1:]]
    blank = {**case, heading: None}
    (healthy,) = solve_calls("INGLE.PEAK", [((tuple(blank),), (tuple(blank.values()),))])
    assert list(healthy.reasons) == [None]


@pytest.mark.parametrize("item", WAITING_ANSWERS, ids=lambda item: item.name)
def test_an_answer_that_is_not_there_yet_is_refused(item: Any) -> None:
    side, number = ("left ", "") if item.where is Where.FACE else ("", "")
    name = item.name.replace("joint", "joint 1") if item.where is Where.JOINT else f"{side}{item.name}{number}"
    asked = f"{name} [{item.kinds[0].unit}]" if item.kinds[0].unit else name
    (found,) = solve_calls("INGLE.ASK", [(((asked, "peak [°C]"),), (tuple(WALL),), (tuple(WALL.values()),))])
    reason = f"{asked} is not available yet; it needs a later version"
    assert found.grid[0][0] is CellError.NA
    # 20 °C and q L²/2k: the answer beside it is not spoilt.
    assert found.grid[0][1] == pytest.approx(20.0 + 1e5 * 0.01**2 / (2 * 2.0))
    assert list(found.reasons) == [reason[0].upper() + reason[1:]]


@pytest.mark.parametrize("function", WAITING_FUNCTIONS, ids=lambda function: function.name)
def test_a_function_that_is_not_there_yet_is_refused(function: Any) -> None:
    (found,) = solve_calls(function.name, [tuple(((1.0,),) for _ in function.arguments)])
    assert [list(row) for row in found.grid] == [[CellError.NA]]
    assert list(found.reasons) == [f"{function.name} is not available yet; it needs a later version"]
