"""The sentences of currents, sources in temperature and bars, with the case that says each: rows for test_messages."""

from __future__ import annotations

K, Q, LENGTH, CURRENT, RHO = "conductivity [W/(m·K)]", "generation [W/m³]", "length [mm]", "current [A]", "resistivity [Ω·m]"
VOLTAGE, TURNS, FILL, WIDTH = "voltage [V]", "turns", "fill factor", "width [mm]"
SECTION, HELD, LIMIT = "section [mm²]", "both held [°C]", "limit [°C]"
SLOPE, REFERENCE = "generation slope [1/K]", "generation reference [°C]"
GONE = object()  # a heading of the good case that is left out
WALL: dict[str, object] = {"shape": "wall", "thickness [mm]": 10.0, K: 15.0, Q: 3e5, HELD: 20.0}
WIRE: dict[str, object] = {"shape": "cylinder", "diameter [mm]": 10.0, K: 390.0, CURRENT: 300.0, RHO: 1.7e-8, "right held [°C]": 20.0}
BAR: dict[str, object] = {"shape": "bar", LENGTH: 400.0, SECTION: 78.0, K: 390.0, CURRENT: 300.0, RHO: 1.7e-8, HELD: 40.0}
FILM = {HELD: GONE, "both film [W/(m²·K)]": 10.0, "both fluid [°C]": 20.0}
HOT_WIRE = {"right held [°C]": GONE, "right film [W/(m²·K)]": 10.0, "right fluid [°C]": 20.0, "resistivity slope [1/K]": 0.004}
NONE = "is of a current, and its layer carries none; fill in"

Row = tuple[dict[str, object], dict[str, object], str]
# A good case, what is changed in it, and what INGLE.WHY says.
CASES: list[Row] = [
    (WALL, {RHO: 2e-8}, f"Resistivity [Ω·m] in this row {NONE} 'current [A]' or leave it blank"),
    (WALL, {"turns 2": 3.0, "thickness 2 [mm]": 1.0, "conductivity 2 [W/(m·K)]": 1.0},
     f"Turns 2 in this row {NONE} 'current 2 [A]' or leave it blank"),
    (WIRE, {SLOPE: 0.01}, "Generation slope [1/K] in this row is of a generation, and its layer has none; fill in 'generation "
     "[W/m³]' or leave it blank"),
    (WALL, {Q: "20:3e5; 90:4e5", SLOPE: 0.01}, "Generation [W/m³] in this row is a text table, beside which generation slope [1/K] "
     "has no meaning; leave one blank"),
    (WALL, {REFERENCE: 20.0}, "Generation reference [°C] in this row needs a slope; fill in 'generation slope [1/K]' or leave it "
     "blank"),
    (WIRE, {"shape": "sphere"}, "Current [A] in this row has no meaning for a sphere; give 'power [W]' or 'generation [W/m³]'"),
    (WIRE, {RHO: None}, "Resistivity [Ω·m] in this row is blank; a current needs it"),
    (WIRE, {RHO: GONE}, "This row has no resistivity, and no heading for it; add a column 'resistivity [µΩ·cm]'"),
    (WIRE, {FILL: 0.6, TURNS: None}, "Turns in this row is blank; a winding's current needs its number of turns"),
    (WIRE, {TURNS: 30.0}, "Current [A] in this row needs the winding's length along the axis; fill in 'length [mm]'"),
    (WIRE, {CURRENT: GONE, VOLTAGE: 1.0}, "Voltage [V] in this row needs the length along the current; fill in 'length [mm]'"),
    (WALL, {Q: GONE, CURRENT: 9.0, RHO: 2e-8}, "Current [A] in this row needs the wall's width across the current; fill in 'width "
     "[mm]'"),
    (WIRE, {"ac ratio": 0.9}, "Ac ratio in this row is 0.9; it must be at least 1 and at most 1000000; correct the value or the "
     "heading's unit"),
    (WIRE, {"left contact [mΩ]": 1.0, "inner radius [mm]": 1.0}, "Left contact [mΩ] in this row belongs to a bar, not to a cylinder; "
     "leave it blank"),
    (WALL, {"side film [W/(m²·K)]": 5.0}, "Side film [W/(m²·K)] in this row belongs to a bar, not to a wall; leave it blank"),
    (BAR, {CURRENT: GONE, RHO: GONE, Q: 1.0, "right contact [mΩ]": 1.0}, "Right contact [mΩ] in this row is of a current, and the "
     "bar carries none; fill in 'current [A]' or leave it blank"),
    (BAR, {"conductivity 2 [W/(m·K)]": 1.0}, "Conductivity 2 [W/(m·K)] in this row is of layer 2, and a bar has one layer; leave it "
     "blank"),
    (BAR, {LENGTH: None}, "Length [mm] in this row is blank; type a value"),
    (BAR, {"diameter [mm]": 5.0}, "Section [mm²] and diameter [mm] in this row both give the bar's section; leave one blank"),
    (BAR, {SECTION: None}, "Section [mm²] in this row is blank; give the bar's section, or its width and thickness, or its diameter"),
    (BAR, {SECTION: None, "perimeter [mm]": 9.0}, "Section [mm²] in this row is blank; give the bar's section"),
    (BAR, {"side film [W/(m²·K)]": 9.0, "side fluid [°C]": 20.0}, "Side film [W/(m²·K)] in this row needs the perimeter of the bar's "
     "section; fill in 'perimeter [mm]'"),
    (BAR, {SECTION: GONE, WIDTH: 9.0}, "This row has no thickness, and no heading for it; add a column 'thickness [mm]'"),
    (BAR, {SECTION: GONE, WIDTH: 9.0, "thickness [mm]": None}, "Thickness [mm] in this row is blank; a bar's section needs both "
     "width and thickness"),
    # No state.
    (WIRE, {**HOT_WIRE, CURRENT: 2000.0}, "The source in this row runs away: it grows with temperature faster than the body can shed "
     "it, so there is no steady state; lower the source or cool the body more"),
    (BAR, {CURRENT: GONE, RHO: GONE, Q: 1e12}, "The body in this row would pass 10,000 °C, where nothing stays solid; check the "
     "source, its unit and the cooling"),
    (BAR, {CURRENT: GONE, RHO: GONE, Q: 1.0, LENGTH: 1e9, "perimeter [mm]": 1e3, "side film [W/(m²·K)]": 1e6, "side fluid [°C]": 20.0,
           "conductivity slope [1/K]": 0.001}, "The temperature in this row changes within too small a part of a layer to be "
     "resolved; shorten the body or check its sizes and slopes"),
    # Cautions.
    (WALL, {Q: "20:3e5"}, "Generation [W/m³] in this row has a table that does not reach the body's temperatures; its end value is "
     "held there, so extend it"),
    (WIRE, {RHO: "0:1.6e-8; 20.0001:1.7e-8"}, "Resistivity [Ω·m] in this row has a table that does not reach the body's "
     "temperatures; its end value is held there, so extend it"),
    (WALL, {SLOPE: 0.001, Q: -3e5}, "Generation [W/m³] in this row is negative, so the body takes heat up; make it positive if it "
     "heats itself"),
]  # fmt: skip

# An answer, a good case, what is changed in it, and the reason of that answer.
ASKED: list[tuple[str, dict[str, object], dict[str, object], str]] = [
    ("side heat out [W]", WALL, {}, "Side heat out [W]: the wall in this row has no sides; ask for its left or right heat out"),
    ("heat made [W/m]", BAR, {}, "Heat made [W/m]: the heat of a bar changes along it; ask for it in W"),
    ("heat made [W/m²]", BAR, {}, "Heat made [W/m²]: heat made in a bar has no one face; ask for it in W or W/m"),
    ("side heat out [W/m²]", BAR, {}, "Side heat out [W/m²]: the bar in this row needs its perimeter; fill in 'perimeter [mm]'"),
    ("voltage [V]", WALL, {}, "Voltage [V]: no current runs in this row; fill in 'current [A]' and 'resistivity [Ω·m]'"),
    ("voltage [V]", WIRE, {}, "Voltage [V]: the current in this row needs the length along it; fill in 'length [mm]'"),
    ("resistance [Ω]", WIRE, {CURRENT: GONE, "current density [A/mm²]": 2.0, FILL: 0.5, LENGTH: 1.0},
     "Resistance [Ω]: the current in this row needs the winding's number of turns; fill in 'turns'"),
    ("resistance [Ω]", WALL, {Q: GONE, VOLTAGE: 1.0, RHO: 2e-8, LENGTH: 1.0},
     "Resistance [Ω]: the current in this row needs the wall's width across it; fill in 'width [mm]'"),
    ("allowable generation [W/m³]", WALL, {Q: "20:3e5; 90:4e5", LIMIT: 50.0}, "Allowable generation [W/m³]: the source in this "
     "row is a text table, which is not one value; ask for 'utilisation [%]'"),
]  # fmt: skip
