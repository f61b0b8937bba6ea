"""Every sentence that a cell, a call or a question can meet, one row each; none may be added without a row here."""

from __future__ import annotations

import ast
import importlib
import inspect
import re
from collections.abc import Iterator

import law_sentences
import pytest
import source_sentences
from ingle_addin import ask
from ingle_addin.batch import solve_calls
from ingle_addin.cells import CellError
from ingle_addin.heading_reader import ANSWER_NAMES, INPUT_NAMES
from ingle_addin.headings import FILM_LAWS
from sheets import DATE

Call = tuple[str, tuple[object, ...]]
D, K, Q, LIMIT = "thickness [mm]", "conductivity [W/(m·K)]", "generation [W/m³]", "limit [°C]"
FILM, FLUID, HELD, PROBE = "both film [W/(m²·K)]", "both fluid [°C]", "both held [°C]", "probe [mm]"
P, LINE, SPECIFIC = "power [W]", "line power [W/m]", "specific generation [W/kg]"
R, R_IN, R_OUT, D_OUT = "radius [mm]", "inner radius [mm]", "outer radius [mm]", "outer diameter [mm]"
R1, D2, K2 = "outer radius 1 [mm]", "thickness 2 [mm]", "conductivity 2 [W/(m·K)]"
WALL = {"shape": "wall", D: 10.0, K: 15.0, Q: 3e5, HELD: 20.0}
ROD = {"shape": "cylinder", R_OUT: 12.0, K: 15.0, Q: 3e5, "right held [°C]": 20.0}
BALL = {**ROD, "shape": "sphere"}
GONE = source_sentences.GONE  # a heading of the good case that is left out
TWO = {D2: 5.0, K2: 2.0}
COOLED = {HELD: GONE, FILM: 10.0, FLUID: 20.0}


def changed(base: dict[str, object], changes: dict[str, object]) -> dict[str, object]:
    return {name: value for name, value in {**base, **changes}.items() if value is not GONE}


def row_call(name: str, base: dict[str, object], changes: dict[str, object], *before: object) -> Call:
    case = changed(base, changes)
    return name, (*(((each,),) for each in before), (tuple(case),), (tuple(case.values()),))


def wall(changes: dict[str, object]) -> Call:
    return row_call("INGLE.WHY", WALL, changes)


def rod(changes: dict[str, object]) -> Call:
    return row_call("INGLE.WHY", ROD, changes)


def of_wall(answer: str, changes: dict[str, object] | None = None) -> Call:
    return row_call("INGLE.ASK", WALL, changes or {}, answer)


def of_rod(answer: str, changes: dict[str, object] | None = None, base: dict[str, object] = ROD) -> Call:
    return row_call("INGLE.ASK", base, changes or {}, answer)


def heading(text: str) -> Call:
    return wall({text: 1.0})


def points(*grids: object) -> Call:
    return "INGLE.POINTS", grids


def profile(count: object, rows: int = 1) -> Call:
    return "INGLE.PROFILE", (((count,),), (tuple(WALL),), (tuple(WALL.values()),) * rows)


def from_python(*values: object) -> Call:
    return "ask", values


def said(call: Call) -> str:
    """The sentence of a call: its reason, or what WHY shows."""
    name, arguments = call
    if name == "ask":
        return str(ask("why", *arguments)[0][0])
    (outcome,) = solve_calls(name, [arguments])  # type: ignore[list-item]
    return str(outcome.reasons[0] or outcome.grid[0][0])


NUMBER, UNIT = "a number belongs here", "correct the value or the heading's unit"
PAIR = "the brackets do not pair; write one unit in square brackets, as in"
LONG = "it is 201 characters long; at most 200 belong in a heading"
CUT = f"'{'x' * 57}...'"
LATER = "is not available yet"
NO_INPUT = "no input has this name;"
MESSAGES: list[tuple[Call, str]] = [
    # Cells, one heading at a time.
    (wall({D: "ten"}), f"Thickness [mm] in this row is the text 'ten'; {NUMBER}"),
    (wall({D: "1e1"}), "Thickness [mm] in this row is '1e1' and is stored as text; convert it to a number"),
    (wall({D: "1,250"}), "Thickness [mm] in this row is '1,250', a text; its comma may part thousands or decimals, so type it as a "
     "number of your spreadsheet"),
    (wall({D: "1,25"}), "Thickness [mm] in this row is '1,25', a text with a decimal comma; type it as a number of your spreadsheet"),
    (wall({K: "20:16; 500"}),
     "Conductivity [W/(m·K)] in this row has '500' in its table; write points as temperature:value, 20:16.2"),
    (wall({K: "20 kg:16"}), "Conductivity [W/(m·K)] in this row has '20 kg:16' in its table: 'kg' is a mass, but a temperature "
     "belongs here; write for example [°C]"),
    (wall({K: "1:9;" * 201}), "Conductivity [W/(m·K)] in this row has a table of 201 points; at most 200 are read"),
    (wall({K: "500:21; 20:16"}), "Conductivity [W/(m·K)] in this row has a table whose temperatures do not rise; put its points in "
     "order"),
    (wall({K: "20:-16"}),
     "Conductivity [W/(m·K)] in this row has a value in its table that no material has; check the values and the "
     "unit"),
    (wall({D: CellError.REF}), "Thickness [mm] in this row holds the error #REF!; correct that cell"),
    (wall({D: True}), f"Thickness [mm] in this row is TRUE; {NUMBER}"),
    (wall({D: DATE.value}), f"Thickness [mm] in this row is a date or time; {NUMBER}, so check the cell's format"),
    (wall({"shape": "tube"}), "Shape in this row is 'tube', which is not known; write wall, cylinder, sphere or bar"),
    (wall({"shape": CellError.NULL}), "Shape in this row holds the error #NULL!; correct that cell"),
    (wall({"shape": False}), "Shape in this row is FALSE; a text belongs here: wall, cylinder, sphere or bar"),
    (wall({"material": 1.0}), "Material in this row is a number; a text belongs here"),
    (wall({"material": DATE.value}), "Material in this row is a date or time; a text belongs here"),
    (wall({D: 10**400}), f"Thickness [mm] in this row is a number beyond 1e308; it must be above 0 and at most 1e9; {UNIT}"),
    (wall({D: -1.0}), f"Thickness [mm] in this row is -1; it must be above 0 and at most 1e9; {UNIT}"),
    (wall({"left emissivity": 2.0}), f"Left emissivity in this row is 2; it must be at least 0 and at most 1; {UNIT}"),
    (wall({LIMIT: -280.0}), "Limit [°C] in this row is -280; nothing is colder than -273.15 (absolute zero) and at most 100000 "
     f"belongs here; {UNIT}"),
    # Rows: what is missing, doubled or contradictory.
    (wall({"material": "copper"}), f"Material in this row {LATER}; leave it blank or wait for a later version"),
    (wall({"shape": None}), "Shape in this row is blank; write wall, cylinder, sphere or bar"),
    (wall({"shape": GONE}), "This row has no shape, and no heading for it; add a column 'shape'"),
    (wall({R_IN: 1.0}), "Inner radius [mm] in this row belongs to a cylinder or a sphere, not to a wall; leave it blank"),
    (wall({D: None}), "Thickness [mm] in this row is blank; type a value"),
    (wall({K: GONE}), "This row has no conductivity, and no heading for it; add a column 'conductivity [W/(m·K)]'"),
    (wall({"left held [K]": 300.0}), "Both held [°C] and left held [K] in this row both give the left held; leave one blank"),
    (rod({"inner held [°C]": 9.0}), "Inner held [°C] in this row lies on an inner face, and this cylinder is solid; give an inner "
     "radius or leave it blank"),
    (rod({R_IN: 0.0, "left held [°C]": 9.0}), "Left held [°C] in this row lies on an inner face, and the bore is 0; give an inner "
     "radius or leave it blank"),
    (rod({R_IN: 1.0, "inner diameter [mm]": 2.0}), "Inner radius [mm] and inner diameter [mm] in this row both give the bore; "
     "leave one blank"),
    (rod({D: 1.0}), "Outer radius [mm] and thickness [mm] in this row both give the outside; leave one blank"),
    (rod({R_OUT: None, D_OUT: None}), "The outside of the cylinder in this row is blank; fill in 'outer radius [mm]' or 'outer "
     "diameter [mm]'"),
    (rod({R_OUT: GONE}), "This row has no outer radius, and no heading for it; add a column 'outer radius [mm]'"),
    (rod({R_OUT: GONE, R: 5.0, R_IN: 1.0}), "Radius [mm] in this row is for a solid body, and inner radius [mm] is 1; use outer "
     "radius instead"),
    (rod({R_IN: 12.0}), "Inner radius [mm] in this row is 12 and outer radius [mm] is 12; make the bore smaller than the "
     "outside"),
    (wall({PROBE: 11.0}), "Probe [mm] in this row is 11, outside the body; give a place in it, from the left face"),
    (rod({PROBE: 13.0}), "Probe [mm] in this row is 13, outside the body; give a place in it, a radius"),
    (wall({P: 1.0}), "Generation [W/m³] and power [W] in this row are two sources in one layer; leave one blank"),
    (wall({Q: None}), "Generation [W/m³] in this row is blank; write 0 for no source"),
    (wall({Q: None, P: None}), "Generation [W/m³] and power [W] in this row are blank; write 0 for no source"),
    (wall({Q: GONE}), "This row has no source, and no heading for one; add a column 'generation [W/m³]', 0 for none"),
    (wall({Q: GONE, SPECIFIC: 1.0}), "Specific generation [W/kg] in this row needs a density; fill in 'density [kg/m³]'"),
    (wall({Q: GONE, P: 1.0}), "Power [W] in this row needs the wall's area; fill in 'area [m²]'"),
    (wall({Q: GONE, LINE: 1.0}), "Line power [W/m] in this row has no meaning for a wall; give 'power [W]' with 'area [m²]'"),
    (rod({Q: GONE, P: 1.0}), "Power [W] in this row needs the cylinder's length; fill in 'length [mm]'"),
    (rod({"shape": "sphere", Q: GONE, LINE: 1.0}), "Line power [W/m] in this row has no meaning for a sphere; give 'power "
     "[W]'"),
    (wall({FILM: 9.0}), "Both held [°C] and both film [W/(m²·K)] in this row contradict each other: a held face takes no film, "
     "fluid, radiation or flux; leave one blank"),
    (wall({HELD: GONE, FILM: 9.0}), "Both film [W/(m²·K)] in this row needs the temperature of its fluid; fill in 'both fluid [°C]'"),
    (wall({HELD: GONE, FLUID: 9.0}), "Both fluid [°C] in this row needs a film; fill in 'both film [W/(m²·K)]'"),
    (wall({HELD: GONE, "left surroundings [°C]": 9.0}), "Left surroundings [°C] in this row needs an emissivity; fill in 'left "
     "emissivity [-]'"),
    (wall({HELD: GONE, "left emissivity": 0.9}), "Left emissivity in this row needs the temperature of its surroundings; fill in "
     "'left surroundings [°C]'"),
    (wall({HELD: GONE, "left resistance [m²·K/W]": 0.1}),
     "Left resistance [m²·K/W] in this row needs a fluid, surroundings or a held "
     "temperature beyond it; fill in 'left fluid [°C]'"),
    (wall({"left resistance [W/(m²·K)]": 0.0}), "Left resistance [W/(m²·K)] in this row is 0; a conductance is above 0"),
    # Layers.
    (wall({"joint [m²·K/W]": 1.0}), "Joint [m²·K/W] in this row needs layer 2, which this body has not; describe that layer or leave "
     "it blank"),
    (rod({R_OUT: GONE, R: 9.0, D2: 1.0}), "Radius [mm] in this row is for a body of one layer, and this one has 2; use 'outer radius "
     "1'"),
    (rod({D2: 1.0}), "Outer radius [mm] in this row does not say of which layer, and this body has 2; write 'outer radius 1' or "
     "'outer radius 2'"),
    (rod({R_OUT: GONE, R1: None, D2: 1.0}), "The outside of layer 1 of the cylinder in this row is blank; fill in 'outer radius 1 "
     "[mm]'"),
    (rod({R_OUT: GONE, R1: 9.0, "outer radius 2 [mm]": 9.0, K2: 1.0}), "Outer radius 2 [mm] in this row is 9, not beyond layer 1; "
     "layers go from the inside out"),
    # No state.
    (wall({"conductivity slope [1/K]": -0.1, Q: 3e7}), "A conductivity or resistivity in this row falls to zero on the way to its "
     "temperature; check the slope or give a table"),
    (wall({HELD: GONE, "left emissivity": 0.9, "left surroundings [°C]": 9.0, Q: -1e6}),
     "No temperature was found at which the heats "
     "of this row balance; check that its values belong together"),
    (wall({HELD: None}), "No heat can leave the body in this row, so it has no steady state; give a face a film above 0 with its "
     "fluid, or hold it at a temperature"),
    (wall({Q: -3e12}), "The answer in this row would lie below absolute zero; check the signs of the generation and the fluxes"),
    (wall({Q: 1e25, K: 1e-300}), "The values in this row are so far apart that the answer is beyond the range of numbers; check "
     "their units"),
    # Answers.
    (of_wall("settling time [s]"), f"Settling time [s] {LATER}; it needs a later version"),
    (of_wall("left share [%]", {Q: 0.0}), "No heat leaves the body in this row, so it has no share; check the source and the sinks"),
    (of_rod("inner face [°C]"), "Inner face [°C]: the cylinder in this row is solid and has no inner face; ask for the peak or the "
     "outer face"),
    (of_wall("probe temperature [°C]", {PROBE: None}), "Probe [mm] in this row is blank; type a place"),
    (of_wall("probe temperature [°C]"), "This row has no probe, and no heading for it; add a column 'probe [mm]'"),
    (of_wall("headroom [K]", {LIMIT: None}), "Limit [°C] in this row is blank; type the highest temperature allowed"),
    (of_wall("headroom [K]"), "This row has no limit; add a column 'limit [°C]', 'left limit [°C]' or 'right limit [°C]'"),
    (of_rod("heat made [W/m²]"), "Heat made [W/m²]: heat made in a cylinder has no one face; ask for it in W or W/m"),
    (of_rod("heat made [W/m]", base=BALL), "Heat made [W/m]: a sphere has no length; ask for it in W"),
    (of_wall("heat made [W/m]"), "Heat made [W/m]: the wall in this row has no length; ask in W, with its area, or in W/m²"),
    (of_rod("heat made [W]"), "Heat made [W]: the cylinder in this row needs its length; fill in 'length [mm]'"),
    (of_wall("right heat out [kW]"), "Right heat out [kW]: the wall in this row needs its area; fill in 'area [m²]'"),
    (row_call("INGLE.ALLOW", WALL, {LIMIT: 15.0}), "Limit [°C] in this row is 15, passed even with no source; raise it or cool the "
     "body more"),
    (row_call("INGLE.ALLOW", WALL, {"left limit [°C]": 50.0}), "No source reaches the limit in this row: that face is held, or the "
     "sources cool the body; give a limit for the peak"),
    (of_wall("allowable power [W]", {LIMIT: 50.0}), "Allowable power [W]: the source in this row is its generation; ask for "
     "'allowable generation'"),
    (of_wall("utilisation [%]", {LIMIT: 20.0}), "The allowable source in this row is 0, so none of it can be used; raise the limit"),
    (of_wall("peak 2 [°C]"), "Peak 2 [°C]: the body in this row has one layer"),
    (of_wall("joint 3 left [°C]", TWO), "Joint 3 left [°C]: the body in this row has 2 layers"),
    (row_call("INGLE.ALLOW", WALL, {**TWO, LIMIT: 50.0, Q: 0.0, "generation 2 [W/m³]": 0.0}), "The sources in this row are all 0, so "
     "they do not say how they scale together; give them"),
    # Cautions.
    (wall({LIMIT: 20.125}), "Limit [°C] in this row is 20.125, and the peak is above it; lower the source or cool the body more"),
    (wall({**COOLED, "left limit [°C]": 50.0}),
     "Left limit [°C] in this row is 50, and the left face is above it; lower the source or "
     "cool the body more"),
    (wall({**COOLED, "right limit [°C]": 50.0}),
     "Right limit [°C] in this row is 50, and the right face is above it; lower the source "
     "or cool the body more"),
    (wall({**TWO, "limit 2 [°C]": 20.5}), "Limit 2 [°C] in this row is 20.5, and that layer's peak is above it; lower the source or "
     "cool the body more"),
    (wall({LIMIT: 15.0}), "Limit [°C] in this row is 15, passed even with no source; raise it or cool the body more"),
    (wall({K: "0:15; 20.125:16"}), "Conductivity [W/(m·K)] in this row has a table that does not reach the body's temperatures; its "
     "end value is held there, so extend it"),
    (wall({Q: -3e5}), "Generation [W/m³] in this row is negative, so the body takes heat up; make it positive if it heats itself"),
    (wall({Q: 2e13}), "Generation [W/m³] in this row is 2e13, which makes over 1e13 W/m³, more than a fusing wire; check its "
     "unit"),
    (wall({D: 2e5}), "Thickness [mm] in this row makes the body over 100 m thick; check its unit"),
    # Headings.
    (heading("thicknes [mm]"), f"Heading 'thicknes [mm]': {NO_INPUT} did you mean 'thickness'?"),
    (heading("wibble"), f"Heading 'wibble': {NO_INPUT} `ingle reference` lists the input headings"),
    (heading("thickness (mm)"), "Heading 'thickness (mm)': write the unit in square brackets, as in 'thickness [mm]'"),
    (heading("thickness [mm"), f"Heading 'thickness [mm': {PAIR} 'thickness [mm]'"),
    (heading("x" * 201), f"Heading {CUT}: {LONG}"),
    (heading("peak [°C]"),
     "Heading 'peak [°C]': this is an answer; leave its column out of the headings and ask for it with INGLE.ASK"),
    (heading("shape 2"), "Heading 'shape 2': 'shape' takes no number; write 'shape'"),
    (heading("joint [K/W]"), "Heading 'joint [K/W]': 'K/W' is a thermal resistance of a whole part, but a thermal resistance of "
     "an area or a heat transfer coefficient belongs here; write for example [m²·K/W] or [W/(m²·K)]"),
    (heading("film [W/(m²·K)]"), "Heading 'film [W/(m²·K)]': say which face: 'left film', 'right film' or 'both film'"),
    (heading("thickness 0 [mm]"), "Heading 'thickness 0 [mm]': layers are counted from 1; write 'thickness 1'"),
    (heading("sd shape"), "Heading 'sd shape': a text has no spread"),
    (heading("± note"), "Heading '± note': no input's name follows"),
    (heading("thickness [kg]"), "Heading 'thickness [kg]': 'kg' is a mass, but a length belongs here; write for example [mm]"),
    (of_wall(""), "An answer heading is blank; name an answer such as 'peak [°C]'"),
    (of_wall("x" * 201), f"Heading {CUT}: {LONG}"),
    (of_wall("peak °C]"), f"Heading 'peak °C]': {PAIR} 'peak [°C]'"),
    (of_wall("peek [°C]"), "Heading 'peek [°C]': no answer has this name; did you mean 'peak'?"),
    (of_wall("wibble"), "Heading 'wibble': no answer has this name; `ingle reference` lists the answer headings"),
    (of_wall("thickness [mm]"), "Heading 'thickness [mm]': this is an input; it cannot be asked as an answer"),
    (of_wall("verdict 2"), "Heading 'verdict 2': 'verdict' takes no number; write 'verdict'"),
    # Calls.
    (("INGLE.PEAK", ((), ((1.0,),))), "The headings are missing; pass the range that holds them"),
    (("INGLE.ASK", ((), (("shape",),), ((1.0,),))), "The answers are missing; pass the range that holds them"),
    (("INGLE.PEAK", (((CellError.REF,),), ((1.0,),))), "The headings hold the error #REF!; correct that cell"),
    (("INGLE.PEAK", ((("a",) * 3,) * 4, ((1.0,),))), "The headings are 4 rows by 3 columns; pass one row, one column, or names "
     "with their units in two"),
    (("INGLE.PEAK", ((("shape",),), ())), "The values are missing; pass one column a heading"),
    (("INGLE.PEAK", ((("shape",),), ((1.0,),) * 2, ((1.0,),) * 3)), "One value argument has 2 rows and another 3; pass ranges of "
     "the same rows"),
    (("INGLE.WHY", (("shape", D),)), "INGLE.WHY takes headings, values; 1 argument was given"),
    (("INGLE.ABOUT", (((1.0,),),)), "INGLE.ABOUT takes nothing; 1 argument was given"),
    (("INGLE.POINTS", ()), "INGLE.POINTS takes temperatures, values; 0 arguments were given"),
    (("INGLE.NONE", ()), "Ingle has no function INGLE.NONE; see `ingle reference`"),
    (("INGLE.FILM", ()), f"INGLE.FILM {LATER}; it needs a later version"),
    (row_call("INGLE.FACE", WALL, {}, CellError.NA), "The side holds the error #N/A; correct that cell"),
    (row_call("INGLE.FACE", WALL, {}, "top"), "The side 'top' is not known; write left, right, inner or outer"),
    (("INGLE.WHY", ((("shape", D),), (("wall",),))), "There are 2 headings but 1 column of values; pass one column a heading"),
    (from_python("shape;conductivity [W/(m·K)]", ["wall"] * 2, [1.0] * 3), "One value has 2 rows and another 3; give columns of "
     "the same rows"),
    (profile(CellError.NUM), "The points hold the error #NUM!; correct that cell"),
    (profile(None), "The points are blank; type a number"),
    (profile("many"), f"The points are 'many'; {NUMBER}"),
    (profile(2.5), "The points are 2.5; give a whole number from 2 to 10000"),
    (profile(3.0, rows=2), "A profile is of one case and 2 were given; pass one row of values"),
    (points(((1.0,), (2.0,)), ((1.0,),)), "The temperatures are 2 and the values 1; pass two ranges of the same size"),
    (points(((1.0,), (CellError.NA,)), ((1.0,), (2.0,))), "Temperature 2 holds the error #N/A; correct that cell"),
    (points(((1.0,), (2.0,)), ((1.0,), (None,))), "Value 2 is blank; fill it in or clear the cell beside it"),
    (points(((1.0,), ("hot",)), ((1.0,), (2.0,))), f"Temperature 2 is 'hot'; {NUMBER}"),
    (points(((1.0,), (float("inf"),)), ((1.0,), (2.0,))), "Temperature 2 is beyond the range of numbers; correct it"),
    (points(((None,),), (("",),)), "Both ranges are blank; give at least one temperature and its value"),
    (points(((20.0,), (20.0,)), ((1.0,), (2.0,))), "Temperature 20 follows 20; they must rise"),
    (points(*[tuple((float(i),) for i in range(4000))] * 2), "The table has 4000 points, more than a cell can hold; pass fewer"),
]  # fmt: skip
LAYERED = {**WALL, **TWO}
MESSAGES += [
    (("INGLE.PROFILE", (((3.0,),), (tuple(LAYERED),), (tuple(LAYERED.values()),))),
     "The points are 3; a body of 2 layers needs at least 4"),
    (from_python("shape;conductivity [W/(m·K)]", [["wall", 1.0], ["wall"]]), "A value is neither a column nor a "
     "block of even rows; give columns of the same rows"),
]  # fmt: skip
MESSAGES += [(row_call("INGLE.WHY", law_sentences.BASE, changes), text) for changes, text in law_sentences.CASES]
MESSAGES += [(row_call("INGLE.ASK", law_sentences.BASE, changes, asked), text) for asked, changes, text in law_sentences.ASKED]

MESSAGES += [(row_call("INGLE.WHY", base, changes), text) for base, changes, text in source_sentences.CASES]
MESSAGES += [(row_call("INGLE.ASK", base, changes, asked), text) for asked, base, changes, text in source_sentences.ASKED]


@pytest.mark.parametrize(("call", "sentence"), MESSAGES, ids=[sentence[:50] for _, sentence in MESSAGES])
def test_sentence(call: Call, sentence: str) -> None:
    assert said(call) == sentence


# The evaluator's modules; what is wrong with a unit is worded in `units`, whose own tests hold those sentences.
MODULES = ("checks", "recipe", "slots", "face_recipe", "source_recipe", "bar_recipe", "answers", "limit_answers", "heat_answers",
           "status_faults", "tables", "batch", "more_functions", "heading_reader", "asking", "cautions",
           "case_builder", "film_headings", "text_tables")  # fmt: skip
# Two words in a row that no sentence is made of: names of headings and answers, and patterns.
NAMES = {
    *INPUT_NAMES,
    *ANSWER_NAMES,
    *FILM_LAWS,
    "fluid kind",
    "peak [°C]",
    "inner share",
    "allowable source",
    "the allowable source",
    "heat out",
    "flux in",
}
VERDICTS = {"over limit", "no limit", "no answer"}
WORDS = re.compile(r"[a-z][,;:']? [a-z(`'\[]")


def texts_of(module: str) -> Iterator[tuple[int, str]]:
    """Line and pattern of every text in a module that reads as words, its braces standing for anything."""
    tree = ast.parse(inspect.getsource(importlib.import_module(f"ingle_addin.{module}")))
    skipped: set[int] = set()
    for node in ast.walk(tree):
        if isinstance(node, (ast.Module, ast.ClassDef, ast.FunctionDef)) and ast.get_docstring(node):
            skipped.add(id(node.body[0].value))  # type: ignore[attr-defined]
        elif isinstance(node, ast.JoinedStr):
            skipped |= {id(part) for part in node.values if isinstance(part, ast.Constant)}
        elif isinstance(node, ast.Call) and ast.unparse(node.func) == "re.compile":
            skipped |= {id(part) for part in node.args}
        if id(node) in skipped:
            continue
        pieces = node.values if isinstance(node, ast.JoinedStr) else [node]
        pieces = [piece.value if isinstance(piece, ast.Constant) else None for piece in pieces]
        if any(isinstance(piece, str) for piece in pieces):
            words = "".join(piece if isinstance(piece, str) else "{}" for piece in pieces)
            if WORDS.search(words) and words.replace("{} ", "") not in NAMES | VERDICTS and words != "{} face [°C]":
                yield node.lineno, ".*".join(re.escape(piece) if isinstance(piece, str) else "" for piece in pieces)  # type: ignore[attr-defined]


@pytest.mark.parametrize("module", MODULES)
def test_every_sentence_of_the_evaluator_has_a_row(module: str) -> None:
    sentences = [sentence for _, sentence in MESSAGES]
    texts = list(texts_of(module))
    lacking = [(line, text) for line, text in texts if not any(re.search(text, each, re.IGNORECASE) for each in sentences)]
    assert texts
    assert lacking == []


def test_the_search_for_sentences_finds_what_it_should() -> None:
    """A sentence in a Fault, in a variable, in one piece of many, and in a helper's argument."""
    found = {module: [text for _, text in texts_of(module)] for module in MODULES}
    assert any("is not known; write left, right, inner or outer" in text.replace("\\", "") for text in found["batch"])
    assert any("passed even with no source" in text.replace("\\", "") for text in found["limit_answers"])
    assert any("colder than" in text.replace("\\", "") for text in found["checks"])
    assert any("layers are counted from 1" in text.replace("\\", "") for text in found["heading_reader"])
    assert sum(map(len, found.values())) > 100


def lengthened(argument: object) -> object:
    """Headings with their units written as long as a unit may be, and texts of a user's own at 300 characters."""
    if isinstance(argument, (tuple, list)):
        return type(argument)(map(lengthened, argument))
    if not isinstance(argument, str):
        return argument
    if argument in {"ten", "tube", "many", "hot", "top", "wibble"}:
        return (argument * 300)[: 300 if argument != "wibble" else 200]
    return re.sub(r"\[(?!°C|K\])([^\[\]]*)\]", r"[(mm/mm)·(mm/mm)·(mm/mm)·(mm/mm)·\1]", argument)


@pytest.mark.parametrize("call", [call for call, _ in MESSAGES], ids=[sentence[:50] for _, sentence in MESSAGES])
def test_sentence_keeps_its_end_and_fits_a_cell_with_long_headings(call: Call) -> None:
    name, arguments = call
    text = said((name, tuple(lengthened(argument) for argument in arguments)))
    assert 0 < len(text) <= 255
    assert not text.endswith("...")


def test_longest_texts_are_cut() -> None:
    many = {**WALL, Q: None, **{f"{name} [{unit}]": None for name, unit in (
        ("power", "(mm/mm)·(mm/mm)·(mm/mm)·(mm/mm)·(mm/mm)·(mm/mm)·W"),
        ("line power", "(mm/mm)·(mm/mm)·(mm/mm)·(mm/mm)·(mm/mm)·(mm/mm)·W/m"),
        ("specific generation", "(mm/mm)·(mm/mm)·(mm/mm)·(mm/mm)·(mm/mm)·W/kg"),
        ("current", "(mm/mm)·(mm/mm)·(mm/mm)·(mm/mm)·(mm/mm)·(mm/mm)·A"),
    )}}  # fmt: skip
    text = said(wall({**many, HELD: 20.0}))
    assert len(text) == 255
    assert text.startswith("Generation [W/m³] and power [(mm/mm)·")
    assert text.endswith("...")
