"""The sentences of film laws and of text tables beside them, with the case that says each: rows for test_messages."""

from __future__ import annotations

LAW, SIZE, SPEED, KIND = "left film law", "left size [mm]", "left speed [m/s]", "left fluid kind"
FLUID, D, K, Q, HELD = "left fluid [°C]", "thickness [mm]", "conductivity [W/(m·K)]", "generation [W/m³]", "right held [°C]"
SLOPE, REFERENCE = "conductivity slope [1/K]", "conductivity reference [°C]"
BASE = {"shape": "wall", D: 10.0, K: 15.0, Q: 3e5, HELD: 20.0}
PLATE = {LAW: "vertical plate", SIZE: 100.0, FLUID: 20.0}
FLOW = {LAW: "plate in flow", SIZE: 100.0, FLUID: 20.0}
THIN = {D: 0.01, Q: 0.0}
GUESS = "take the film as a guess"

# What a wall held on the right has on its left, and what INGLE.WHY says of it.
CASES: list[tuple[dict[str, object], str]] = [
    ({SIZE: 5.0}, "Left size [mm] in this row is of a film law; fill in 'left film law' or leave it blank"),
    ({"both speed [m/s]": 5.0, HELD: 20.0}, "Both speed [m/s] in this row is of a film law; fill in 'both film law' or leave it "
     "blank"),
    ({**PLATE, SIZE: None}, "Left film law in this row is 'vertical plate' and needs a size; fill in 'left size [mm]'"),
    (FLOW, "Left film law in this row is 'plate in flow' and needs a speed; fill in 'left speed [m/s]'"),
    ({**PLATE, SPEED: 1.0}, "Left speed [m/s] in this row has no place in the law 'vertical plate', which is of still fluid; leave "
     "it blank or choose a law of flow"),
    ({**PLATE, "left film [W/(m²·K)]": 5.0}, "Left film [W/(m²·K)] and left film law in this row both give the film "
     "coefficient; leave one blank"),
    ({**PLATE, FLUID: None}, "Left film law in this row needs the temperature of its fluid; fill in 'left fluid [°C]'"),
    ({**PLATE, KIND: "water", FLUID: 99.0, HELD: 150.0}, "Left film law in this row: water freezes or boils there at one "
     "atmosphere; choose another fluid or law"),
    ({**PLATE, FLUID: 1800.0, HELD: 1900.0}, "Left film law in this row: the fluid's temperatures are outside those its "
     f"properties are known for; {GUESS}"),
    ({LAW: "hot face down", SIZE: 0.1, FLUID: 20.0}, "Left film law in this row: its Rayleigh number is outside the law's range; "
     f"{GUESS}"),
    ({**FLOW, SPEED: 0.001}, f"Left film law in this row: its Reynolds number is outside the law's range; {GUESS}"),
    ({**FLOW, **THIN, SPEED: 50.0, SIZE: 1000.0, HELD: 1000.0}, "Left film law in this row: a hotter face would lose less heat "
     "there, so other temperatures are possible too; test it"),
    ({**PLATE, KIND: "water", FLUID: 2.0, HELD: 10.0}, "Left film law in this row: water is densest between face and fluid, where "
     f"its currents turn; {GUESS}"),
    ({LAW: "tube flow", KIND: "water", SPEED: 0.025, SIZE: 100.0, FLUID: 20.0}, "Left film law in this row: the flow is neither "
     f"laminar nor turbulent; {GUESS}"),
    ({**FLOW, SPEED: 0.5, SIZE: 500.0, HELD: 200.0}, "Left film law in this row: natural convection would be as strong as the "
     "flow; compare with a law of still fluid"),
    ({**FLOW, SPEED: 200.0}, "Left film law in this row: air that fast heats itself; the fluid's temperature is not what the face "
     "feels"),
    ({K: "0:10; 500:20", SLOPE: 0.01}, "Conductivity [W/(m·K)] in this row is a text table, beside which conductivity slope [1/K] "
     "has no meaning; leave one blank"),
    ({REFERENCE: 20.0}, "Conductivity reference [°C] in this row needs a slope; fill in 'conductivity slope [1/K]' or leave it "
     "blank"),
    ({K: "300 K:398; 400:393"}, "Conductivity [W/(m·K)] in this row has a table of mixed temperature units; give every point the "
     "same unit, or none"),
    ({K: "20:5; 2e5:6"}, "Conductivity [W/(m·K)] in this row has a table that goes beyond 1e5 °C; check its temperatures and "
     "their unit"),
    ({K: "-300:5; 500:6"}, "Conductivity [W/(m·K)] in this row has a table that begins below absolute zero; check its "
     "temperatures and their unit"),
]  # fmt: skip

# Answers that a film law gives.
ASKED: list[tuple[str, dict[str, object], str]] = [
    ("allowable generation [W/m³]", {SLOPE: -0.005, "left held [°C]": 20.0, "limit [°C]": 300.0}, "The conductivity in this row "
     "falls to zero before a limit is reached; check the slope or give a table"),
    ("left film used [W/(m²·K)]", {}, "Left film used [W/(m²·K)]: no law gives the film there in this row; fill in 'left film law'"),
]  # fmt: skip
