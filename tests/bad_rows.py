"""Tables of good and bad rows for the tests: what a wrong cell does to its row, in error and in words."""

from __future__ import annotations

from dataclasses import dataclass

from ingle_addin.cells import CellError
from sheets import DATE, EMPTY_TEXT, ERRORS, TIME

NA, NUM, VALUE = CellError.NA, CellError.NUM, CellError.VALUE
D, K, Q = "thickness [mm]", "conductivity [W/(m·K)]", "generation [W/m³]"
FILM, FLUID, HELD = "both film [W/(m²·K)]", "both fluid [°C]", "both held [°C]"
P, LINE, SPECIFIC = "power [W]", "line power [W/m]", "specific generation [W/kg]"
R_IN, D_IN, R_OUT, D_OUT = "inner radius [mm]", "inner diameter [mm]", "outer radius [mm]", "outer diameter [mm]"
NOT_A_NUMBER = "a number belongs here"
NO_COOLING = (
    "No heat can leave the body in {row}, so it has no steady state; give a face a film above 0 with its fluid, or hold it at a "
    "temperature"
)
TOO_COLD = "The answer in {row} would lie below absolute zero; check the signs of the generation and the fluxes"
LATER = "is not available yet; leave it blank or wait for a later version"
HEADING_UNIT = "correct the value or the heading's unit"
TOO_WIDE = "and outer radius [mm] is 12; make the bore smaller than the outside"
COMMA = "a text with a decimal comma; type it as a number of your spreadsheet"
BLANK_ROW = ("", "")


@dataclass(frozen=True)
class Table:
    """Headings with a good row, and bad rows: what each changes in the good one, the error, and the sentence."""

    good: dict[str, object]
    bad: list[tuple[dict[str, object], object, str]]


def size(value: str) -> str:
    return f"Thickness [mm] in {{row}} is {value}; it must be above 0 and at most 1e9; {HEADING_UNIT}"


def cold(value: str) -> str:
    limits = "nothing is colder than -273.15 (absolute zero) and at most 100000 belongs here"
    return f"Both fluid [°C] in {{row}} is {value}; {limits}; {HEADING_UNIT}"


def both(one: str, other: str, what: str) -> str:
    return f"{one} and {other} in {{row}} both give the {what}; leave one blank"


def held(one: str, other: str) -> str:
    remedy = "a held face takes no film, fluid, radiation or flux; leave one blank"
    return f"{one} and {other} in {{row}} contradict each other: {remedy}"


CELLS = Table(
    {"shape": "wall", D: 10.0, K: 15.0, Q: 3e5, FILM: 400.0, FLUID: 20.0, "probe [mm]": 4.0, "note": "kept"},
    [
        ({D: 0.0}, NUM, size("0")),
        ({D: -10.0}, NUM, size("-10")),
        ({D: 1e300}, NUM, size("1e300")),
        ({D: True}, VALUE, f"Thickness [mm] in {{row}} is TRUE; {NOT_A_NUMBER}"),
        ({D: DATE}, VALUE, f"Thickness [mm] in {{row}} is a date or time; {NOT_A_NUMBER}, so check the cell's format"),
        ({Q: TIME}, VALUE, f"Generation [W/m³] in {{row}} is a date or time; {NOT_A_NUMBER}, so check the cell's format"),
        ({D: "ten"}, VALUE, f"Thickness [mm] in {{row}} is the text 'ten'; {NOT_A_NUMBER}"),
        ({D: "10 mm"}, VALUE, f"Thickness [mm] in {{row}} is the text '10 mm'; {NOT_A_NUMBER}"),
        ({D: "10"}, VALUE, "Thickness [mm] in {row} is '10' and is stored as text; convert it to a number"),
        ({D: " 1.5e1 "}, VALUE, "Thickness [mm] in {row} is '1.5e1' and is stored as text; convert it to a number"),
        ({D: "12,5"}, VALUE, f"Thickness [mm] in {{row}} is '12,5', {COMMA}"),
        ({FLUID: "-3,5"}, VALUE, f"Both fluid [°C] in {{row}} is '-3,5', {COMMA}"),
        ({D: None}, NA, "Thickness [mm] in {row} is blank; type a value"),
        ({K: EMPTY_TEXT}, NA, "Conductivity [W/(m·K)] in {row} is blank; type a value"),
        ({Q: "   "}, NA, "Generation [W/m³] in {row} is blank; write 0 for no source"),
        ({FLUID: None}, NA, "Both film [W/(m²·K)] in {row} needs the temperature of its fluid; fill in 'both fluid [°C]'"),
        ({FILM: None}, NA, "Both fluid [°C] in {row} needs a film; fill in 'both film [W/(m²·K)]'"),
        ({FILM: None, FLUID: None}, NUM, NO_COOLING),
        ({FILM: 0.0}, NUM, NO_COOLING),
        ({FILM: -4.0}, NUM, f"Both film [W/(m²·K)] in {{row}} is -4; it must be at least 0 and at most 1e20; {HEADING_UNIT}"),
        ({FLUID: -300.0}, NUM, cold("-300")),
        ({FLUID: 1e300}, NUM, cold("1e300")),
        ({Q: -3e12}, NUM, TOO_COLD),
        ({Q: 1e25, K: 1e-300}, NUM, "The values in {row} are so far apart that the answer is beyond the range of numbers; check "
         "their units"),
        ({"shape": "cube"}, VALUE, "Shape in {row} is 'cube', which is not known; write wall, cylinder, sphere or bar"),
        ({"shape": 5.0}, VALUE, "Shape in {row} is a number; a text belongs here: wall, cylinder, sphere or bar"),
        ({"shape": None}, NA, "Shape in {row} is blank; write wall, cylinder, sphere or bar"),
        ({"shape": "bar"}, NA, "{Row} has no length, and no heading for it; add a column 'length [mm]'"),
        ({"shape": ERRORS[NA]}, NA, "Shape in {row} holds the error #N/A; correct that cell"),
        *(({D: ERRORS[error]}, error, f"Thickness [mm] in {{row}} holds the error {error}; correct that cell") for error in ERRORS),
        # An error goes before every other fault of its row, wherever it stands.
        ({D: "ten", Q: ERRORS[NUM]}, NUM, "Generation [W/m³] in {row} holds the error #NUM!; correct that cell"),
        ({"probe [mm]": 10.5}, NUM, "Probe [mm] in {row} is 10.5, outside the body; give a place in it, from the left face"),
        (dict.fromkeys(("shape", D, K, Q, FILM, FLUID, "probe [mm]", "note")), *BLANK_ROW),
        (dict.fromkeys(("shape", D, K, Q, FILM, FLUID, "probe [mm]")), *BLANK_ROW),  # a note alone is no case
        (dict.fromkeys(("shape", D, K, Q, FILM, FLUID, "probe [mm]"), EMPTY_TEXT), *BLANK_ROW),
    ],
)  # fmt: skip

FACES = Table(
    {"shape": "wall", D: 10.0, K: 15.0, Q: 3e5, FILM: 400.0, FLUID: 20.0, "left film [W/(m²·K)]": None, "left fluid [°C]": None,
     HELD: None, "right held [°C]": None, "left flux in [W/m²]": None, "outer diameter [mm]": None},
    [
        ({"left film [W/(m²·K)]": 400.0}, VALUE, both("Both film [W/(m²·K)]", "left film [W/(m²·K)]", "left film")),
        ({"left fluid [°C]": 20.0}, VALUE, both("Both fluid [°C]", "left fluid [°C]", "left fluid")),
        ({HELD: 20.0}, VALUE, held("Both held [°C]", "both film [W/(m²·K)]")),
        ({"right held [°C]": 20.0}, VALUE, held("Right held [°C]", "both film [W/(m²·K)]")),
        ({FILM: None, FLUID: None, HELD: 20.0, "left flux in [W/m²]": 5.0}, VALUE, held("Both held [°C]", "left flux in [W/m²]")),
        ({FILM: None, FLUID: None, HELD: 20.0, "right held [°C]": 20.0}, VALUE,
         both("Both held [°C]", "right held [°C]", "right held")),
        ({FILM: None, FLUID: None, "left film [W/(m²·K)]": 9.0}, NA,
         "Left film [W/(m²·K)] in {row} needs the temperature of its fluid; fill in 'left fluid [°C]'"),
        ({FILM: None, "left film [W/(m²·K)]": 9.0}, NA, "Both fluid [°C] in {row} needs a film; fill in 'right film [W/(m²·K)]'"),
        ({FILM: None, FLUID: None, "left flux in [W/m²]": 9.0}, NUM, NO_COOLING),
        ({"left flux in [W/m²]": -1e9}, NUM, TOO_COLD),
        ({"outer diameter [mm]": 9.0}, VALUE,
         "Outer diameter [mm] in {row} belongs to a cylinder or a sphere, not to a wall; leave it blank"),
    ],
)  # fmt: skip

SOURCES = Table(
    {"shape": "wall", D: 10.0, K: 15.0, Q: 3e5, P: None, LINE: None, SPECIFIC: None, FILM: 400.0, FLUID: 20.0,
     "material": None, "current [A]": None, "resistivity [Ω·m]": None, "generation slope [1/K]": None, "left film law": None,
     "± thickness [mm]": None, "conductivity 2 [W/(m·K)]": None},
    [
        ({P: 5.0}, VALUE, "Generation [W/m³] and power [W] in {row} are two sources in one layer; leave one blank"),
        ({P: 0.0}, VALUE, "Generation [W/m³] and power [W] in {row} are two sources in one layer; leave one blank"),
        ({Q: None, P: 5.0}, NA, "Power [W] in {row} needs the wall's area; fill in 'area [m²]'"),
        ({Q: None, SPECIFIC: 5.0}, NA, "Specific generation [W/kg] in {row} needs a density; fill in 'density [kg/m³]'"),
        ({Q: None, LINE: 5.0}, NA,
         "Line power [W/m] in {row} has no meaning for a wall; give 'power [W]' with 'area [m²]'"),
        ({Q: None}, NA, "Generation [W/m³] and power [W] and line power [W/m] and specific generation [W/kg] and current [A] in "
         "{row} are blank; write 0 for no source"),
        ({"material": "copper"}, NA, f"Material in {{row}} {LATER}"),
        ({"material": 7.0}, VALUE, "Material in {row} is a number; a text belongs here"),
        ({"current [A]": 90.0}, VALUE, "Generation [W/m³] and current [A] in {row} are two sources in one layer; leave one blank"),
        ({Q: None, "current [A]": 90.0}, NA, "Resistivity [Ω·m] in {row} is blank; a current needs it"),
        ({Q: None, "current [A]": 90.0, "resistivity [Ω·m]": 1e-6}, NA, "Current [A] in {row} needs the wall's width across the "
         "current; fill in 'width [mm]'"),
        ({"resistivity [Ω·m]": 1e-6}, VALUE, "Resistivity [Ω·m] in {row} is of a current, and its layer carries none; fill in "
         "'current [A]' or leave it blank"),
        ({Q: None, SPECIFIC: None, P: 5.0, "generation slope [1/K]": 0.004}, NA,
         "Power [W] in {row} needs the wall's area; fill in 'area [m²]'"),
        ({Q: 1e12, "generation slope [1/K]": 0.004}, NUM, "The source in {row} runs away: it grows with temperature faster than the "
         "body can shed it, so there is no steady state; lower the source or cool the body more"),
        ({"material": "copper"}, NA, f"Material in {{row}} {LATER}"),
        ({"left film law": "flat"}, VALUE, "Left film law in {row} is 'flat', which is not known; write vertical plate, horizontal "
         "cylinder, sphere, hot face up, hot face down, cylinder in cross flow, plate in flow or tube flow"),
        ({"± thickness [mm]": 0.1}, NA, f"± thickness [mm] in {{row}} {LATER}"),
        ({"conductivity 2 [W/(m·K)]": 9.0}, NA,
         "{Row} has no thickness 2, and no heading for it; add a column 'thickness 2 [mm]'"),
        ({Q: "20:3e5; 500"}, VALUE,
         "Generation [W/m³] in {row} has '500' in its table; write points as temperature:value, 20:16.2"),
    ],
)  # fmt: skip

ROUND = Table(
    {"shape": "cylinder", R_IN: 4.0, D_IN: None, R_OUT: 12.0, D_OUT: None, "radius [mm]": None, K: 15.0, Q: 3e5, P: None, LINE: None,
     FILM: 400.0, FLUID: 20.0, "inner film [W/(m²·K)]": None, "inner fluid [°C]": None, "width [mm]": None, "probe [mm]": None},
    [
        ({R_IN: 12.0}, NUM, f"Inner radius [mm] in {{row}} is 12 {TOO_WIDE}"),
        ({R_IN: 15.0}, NUM, f"Inner radius [mm] in {{row}} is 15 {TOO_WIDE}"),
        ({R_IN: None, D_IN: 30.0}, NUM, f"Inner diameter [mm] in {{row}} is 30 {TOO_WIDE}"),
        ({R_IN: -1.0}, NUM, f"Inner radius [mm] in {{row}} is -1; it must be at least 0 and at most 1e9; {HEADING_UNIT}"),
        ({D_IN: 8.0}, VALUE, "Inner radius [mm] and inner diameter [mm] in {row} both give the bore; leave one blank"),
        ({D_OUT: 24.0}, VALUE, "Outer radius [mm] and outer diameter [mm] in {row} both give the outside; leave one blank"),
        ({R_OUT: None}, NA, "The outside of the cylinder in {row} is blank; fill in 'outer radius [mm]' or 'outer diameter [mm]'"),
        ({R_OUT: None, "radius [mm]": 12.0}, VALUE, "Radius [mm] in {row} is for a solid body, and inner radius [mm] is 4; use outer "
         "radius instead"),
        ({R_IN: None, FILM: None, FLUID: None, "inner film [W/(m²·K)]": 9.0, "inner fluid [°C]": 20.0}, VALUE,
         "Inner film [W/(m²·K)] in {row} lies on an inner face, and this cylinder is solid; give an inner radius or leave it blank"),
        ({R_IN: 0.0, FILM: None, FLUID: None, "inner film [W/(m²·K)]": 9.0, "inner fluid [°C]": 20.0}, VALUE,
         "Inner film [W/(m²·K)] in {row} lies on an inner face, and the bore is 0; give an inner radius or leave it blank"),
        ({"width [mm]": 5.0}, VALUE, "Width [mm] in {row} belongs to a wall or a bar, not to a cylinder; leave it blank"),
        ({"shape": "sphere", Q: None, LINE: 5.0}, VALUE,
         "Line power [W/m] in {row} has no meaning for a sphere; give 'power [W]'"),
        ({Q: None, P: 5.0}, NA, "Power [W] in {row} needs the cylinder's length; fill in 'length [mm]'"),
        ({"probe [mm]": 3.0}, NUM, "Probe [mm] in {row} is 3, outside the body; give a place in it, a radius"),
        ({"probe [mm]": 12.1}, NUM, "Probe [mm] in {row} is 12.1, outside the body; give a place in it, a radius"),
    ],
)  # fmt: skip

DOUBLED = Table(
    {"shape": "wall", D: 10.0, "Thickness  [cm]": None, K: 15.0, Q: 3e5, HELD: 20.0, "left held [°F]": None},
    [
        ({"Thickness  [cm]": 1.0}, VALUE, both("Thickness [mm]", "Thickness [cm]", "thickness")),
        ({"left held [°F]": 68.0}, VALUE, both("Both held [°C]", "left held [°F]", "left held")),
    ],
)

D2, K2, Q2 = "thickness 2 [mm]", "conductivity 2 [W/(m·K)]", "generation 2 [W/m³]"
D3, K3 = "thickness 3 [mm]", "conductivity 3 [W/(m·K)]"
JOINT, JOINT2, SLOPE = "joint 1 [m²·K/W]", "joint 2 [m²·K/W]", "conductivity slope [1/K]"
RANGE = "it must be at least 0 and at most"
UNREAD = "write points as temperature:value, 20:16.2"
LAYERS = Table(
    {"shape": "wall", D: 10.0, K: 15.0, Q: 3e5, D2: 5.0, K2: 2.0, Q2: None, D3: 1.0, K3: 50.0, JOINT: 1e-4, JOINT2: None,
     "joint 3 [m²·K/W]": None, "joint 2 [W/(m²·K)]": None, "limit 4 [°C]": None, SLOPE: 1e-3, R_OUT: None, FILM: 400.0, FLUID: 20.0},
    [
        ({D2: None}, NA, "Thickness 2 [mm] in {row} is blank; type a value"),
        ({D2: None, K2: None, JOINT: None}, NA, "Thickness 2 [mm] in {row} is blank; type a value"),
        ({K2: None}, NA, "Conductivity 2 [W/(m·K)] in {row} is blank; type a value"),
        ({D3: None}, NA, "Thickness 3 [mm] in {row} is blank; type a value"),
        ({D: None}, NA, "Thickness [mm] in {row} is blank; type a value"),
        ({D2: 0.0}, NUM, f"Thickness 2 [mm] in {{row}} is 0; it must be above 0 and at most 1e9; {HEADING_UNIT}"),
        ({K3: "5,5"}, VALUE, f"Conductivity 3 [W/(m·K)] in {{row}} is '5,5', {COMMA}"),
        ({K: None}, NA, "Conductivity [W/(m·K)] in {row} is blank; type a value"),
        ({"joint 3 [m²·K/W]": 1e-4}, NA,
         "Joint 3 [m²·K/W] in {row} needs layer 4, which this body has not; describe that layer or leave it blank"),
        ({D3: None, K3: None, JOINT2: 1e-4}, NA,
         "Joint 2 [m²·K/W] in {row} needs layer 3, which this body has not; describe that layer or leave it blank"),
        ({"limit 4 [°C]": 90.0}, NA,
         "Limit 4 [°C] in {row} needs layer 4, which this body has not; describe that layer or leave it blank"),
        ({JOINT: -1e-4}, NUM, f"Joint 1 [m²·K/W] in {{row}} is -0.0001; {RANGE} 1e20; {HEADING_UNIT}"),
        ({JOINT2: 1e-4, "joint 2 [W/(m²·K)]": 1e4}, VALUE, both("Joint 2 [m²·K/W]", "joint 2 [W/(m²·K)]", "joint 2")),
        ({"joint 2 [W/(m²·K)]": 0.0}, NUM, "Joint 2 [W/(m²·K)] in {row} is 0; a conductance is above 0"),
        ({SLOPE: -1.0, Q: 3e8}, NUM, "A conductivity or resistivity in {row} falls to zero on the way to its temperature; check the "
         "slope or give a table"),
        ({Q: None}, NA, "Generation [W/m³] and generation 2 [W/m³] in {row} are blank; write 0 for no source"),
        ({R_OUT: 20.0}, VALUE, "Outer radius [mm] in {row} belongs to a cylinder or a sphere, not to a wall; leave it blank"),
    ],
)  # fmt: skip

OUT1, OUT2, OUT2_D = "outer radius 1 [mm]", "outer radius 2 [mm]", "outer diameter 2 [mm]"
SHELLS = Table(
    {"shape": "cylinder", R_IN: None, OUT1: 12.0, R_OUT: None, "radius [mm]": None, K: 15.0, Q: 3e5, OUT2: 15.0, OUT2_D: None,
     D2: None, K2: 2.0, D3: None, K3: None, "power 2 [W]": None, FILM: 400.0, FLUID: 20.0},
    [
        ({OUT1: None, R_OUT: 12.0}, VALUE,
         "Outer radius [mm] in {row} does not say of which layer, and this body has 2; write 'outer radius 1' or 'outer radius 2'"),
        ({OUT1: None, "radius [mm]": 12.0}, VALUE,
         "Radius [mm] in {row} is for a body of one layer, and this one has 2; use 'outer radius 1'"),
        ({R_OUT: 12.0}, VALUE, both("Outer radius 1 [mm]", "outer radius [mm]", "outer radius")),
        ({OUT2: 12.0}, NUM, "Outer radius 2 [mm] in {row} is 12, not beyond layer 1; layers go from the inside out"),
        ({OUT2: 10.0}, NUM, "Outer radius 2 [mm] in {row} is 10, not beyond layer 1; layers go from the inside out"),
        ({OUT2: None, OUT2_D: 15.0}, NUM,
         "Outer diameter 2 [mm] in {row} is 15, not beyond layer 1; layers go from the inside out"),
        ({R_IN: 12.0}, NUM, "Inner radius [mm] in {row} is 12 and outer radius 1 [mm] is 12; make the bore smaller than the "
         "outside"),
        ({D2: 3.0}, VALUE, "Outer radius 2 [mm] and thickness 2 [mm] in {row} both give the outside of layer 2; leave one blank"),
        ({OUT2_D: 30.0}, VALUE,
         "Outer radius 2 [mm] and outer diameter 2 [mm] in {row} both give the outside of layer 2; leave one blank"),
        ({OUT2: None}, NA, "The outside of layer 2 of the cylinder in {row} is blank; fill in 'outer radius 2 [mm]' or 'outer "
         "diameter 2 [mm]'"),
        ({OUT1: None}, NA,
         "The outside of layer 1 of the cylinder in {row} is blank; fill in 'outer radius 1 [mm]' or 'radius [mm]'"),
        ({OUT2: None, K2: None, D3: 2.0, K3: 1.0}, NA, "The outside of layer 2 of the cylinder in {row} is blank; fill in 'outer "
         "radius 2 [mm]' or 'outer diameter 2 [mm]'"),
        ({"power 2 [W]": 5.0}, NA, "Power 2 [W] in {row} needs the cylinder's length; fill in 'length [mm]'"),
    ],
)  # fmt: skip

TEXT_TABLES = Table(
    {"shape": "wall", D: 10.0, K: "0 °C:14; 100 °C:16; 227 °C:18", Q: 3e5, FILM: 400.0, FLUID: 20.0, "both limit [°C]": None},
    [
        ({K: "20:16.2; 500"}, VALUE, f"Conductivity [W/(m·K)] in {{row}} has '500' in its table; {UNREAD}"),
        ({K: "20:16.2; 500:hot"}, VALUE, f"Conductivity [W/(m·K)] in {{row}} has '500:hot' in its table; {UNREAD}"),
        ({K: "20:16,2; 500:21,5"}, VALUE, f"Conductivity [W/(m·K)] in {{row}} has '20:16,2' in its table; {UNREAD}"),
        ({K: "20 mm:16.2"}, VALUE, "Conductivity [W/(m·K)] in {row} has '20 mm:16.2' in its table: 'mm' is a length, but a "
         "temperature belongs here; write for example [°C]"),
        ({K: "500:21.5; 20:16.2"}, NUM,
         "Conductivity [W/(m·K)] in {row} has a table whose temperatures do not rise; put its points in order"),
        ({K: "20:16.2; 20:21.5"}, NUM,
         "Conductivity [W/(m·K)] in {row} has a table whose temperatures do not rise; put its points in order"),
        ({K: "20:16.2; 500:-21.5"}, NUM,
         "Conductivity [W/(m·K)] in {row} has a value in its table that no material has; check the values and the unit"),
        ({K: "20:0; 500:21.5"}, NUM,
         "Conductivity [W/(m·K)] in {row} has a value in its table that no material has; check the values and the unit"),
        ({K: "; ".join(f"{T}:15" for T in range(201))}, VALUE,
         "Conductivity [W/(m·K)] in {row} has a table of 201 points; at most 200 are read"),
        ({D: "20:10"}, VALUE, f"Thickness [mm] in {{row}} is the text '20:10'; {NOT_A_NUMBER}"),
    ],
)  # fmt: skip

EMITTED, AROUND, RESISTANCE = "left emissivity", "left surroundings [°C]", "left resistance [m²·K/W]"
CONDUCTANCE = "left resistance [W/(m²·K)]"
RADIATING = Table(
    {"shape": "wall", D: 10.0, K: 15.0, Q: 3e3, EMITTED: 0.8, AROUND: 20.0, RESISTANCE: 1e-3, CONDUCTANCE: None,
     "left fluid [°C]": None, "left film [W/(m²·K)]": None, "left held [°C]": None, "left flux in [W/m²]": None},
    [
        ({EMITTED: 1.2}, NUM, f"Left emissivity in {{row}} is 1.2; {RANGE} 1; {HEADING_UNIT}"),
        ({EMITTED: -0.1}, NUM, f"Left emissivity in {{row}} is -0.1; {RANGE} 1; {HEADING_UNIT}"),
        ({EMITTED: None}, NA, "Left surroundings [°C] in {row} needs an emissivity; fill in 'left emissivity'"),
        ({AROUND: None}, NA,
         "Left emissivity in {row} needs the temperature of its surroundings; fill in 'left surroundings [°C]'"),
        ({EMITTED: None, AROUND: None}, NA, "Left resistance [m²·K/W] in {row} needs a fluid, surroundings or a held temperature "
         "beyond it; fill in 'left fluid [°C]'"),
        ({RESISTANCE: -1.0}, NUM, f"Left resistance [m²·K/W] in {{row}} is -1; {RANGE} 1e20; {HEADING_UNIT}"),
        ({CONDUCTANCE: 50.0}, VALUE, both("Left resistance [m²·K/W]", "left resistance [W/(m²·K)]", "left resistance")),
        ({RESISTANCE: None, CONDUCTANCE: 0.0}, NUM, "Left resistance [W/(m²·K)] in {row} is 0; a conductance is above 0"),
        ({"left held [°C]": 20.0}, VALUE, held("Left held [°C]", "left emissivity")),
        ({EMITTED: None, "left held [°C]": 20.0}, VALUE, held("Left held [°C]", "left surroundings [°C]")),
        ({"left film [W/(m²·K)]": 9.0}, NA,
         "Left film [W/(m²·K)] in {row} needs the temperature of its fluid; fill in 'left fluid [°C]'"),
        ({EMITTED: None, AROUND: None, RESISTANCE: None, "left fluid [°C]": 20.0}, NA,
         "Left fluid [°C] in {row} needs a film; fill in 'left film [W/(m²·K)]'"),
        ({EMITTED: 0.0}, NUM, NO_COOLING),
        ({AROUND: -300.0}, NUM, "Left surroundings [°C] in {row} is -300; nothing is colder than -273.15 (absolute zero) and at most "
         f"100000 belongs here; {HEADING_UNIT}"),
        ({RESISTANCE: None, "left flux in [W/m²]": -1e5}, NUM,
         "No temperature was found at which the heats of {row} balance; check that its values belong together"),
    ],
)  # fmt: skip

TABLES = {
    "cells": CELLS,
    "faces": FACES,
    "sources": SOURCES,
    "round": ROUND,
    "doubled": DOUBLED,
    "layers": LAYERS,
    "shells": SHELLS,
    "text tables": TEXT_TABLES,
    "radiating": RADIATING,
}


def sentence_of(sentence: str, row: int) -> str:
    """A sentence as shown for a row: by its number among several, 0 where it stands alone."""
    words = f"row {row} of the values" if row else "this row"
    return sentence.replace("{row}", words).replace("{Row}", words[0].upper() + words[1:])
