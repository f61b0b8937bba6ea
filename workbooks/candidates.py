"""The invented candidates of the switchgear workbook, and the assumptions they rest on."""

from __future__ import annotations

WORKSHOP = "Quillfen Switchgear Workshop"

# What a row of the table below may leave out: its cell is then empty.
Cells = dict[str, float | str]

# name, meaning, value, unit, note: each becomes a defined name that the case table refers to.
ASSUMPTIONS: tuple[tuple[str, str, float, str, str], ...] = (
    ("Air_inside", "air inside the enclosure", 40.0, "°C", "the usual inside temperature in this invented shop"),
    ("Air_gap", "air between a bar and the panel wall", 48.0, "°C", "warmer: it hardly moves"),
    ("Air_outside", "outdoor air on a hot day", 35.0, "°C", ""),
    ("Water", "cooling water, mean along the bore", 30.0, "°C", ""),
    ("Plate", "cooled plate under a coil", 40.0, "°C", "the face of the coil is held at this temperature"),
    ("Film_still", "film, flat face in still air", 8.0, "W/(m²·K)", "convection and radiation together"),
    ("Film_round", "film, round conductor in still air", 9.0, "W/(m²·K)", "convection and radiation together"),
    ("Film_gap", "film, face near the panel wall", 3.5, "W/(m²·K)", ""),
    ("Film_outdoor", "film, face outdoors", 12.0, "W/(m²·K)", ""),
    ("Film_forced", "film, forced air", 30.0, "W/(m²·K)", ""),
    ("Film_water", "film, water in a clean bore", 6000.0, "W/(m²·K)", "turbulent flow"),
    ("Film_fouled", "film, water in a fouled bore", 1500.0, "W/(m²·K)", "scale inside"),
    ("Sun", "sun taken in by a dull face", 450.0, "W/m²", ""),
    ("Neighbour", "heat taken in from a hot neighbour", 250.0, "W/m²", ""),
    ("Bar_length", "length looked at", 1000.0, "mm", "heats in W are for this length"),
    ("Limit_bare", "limit, bare bars", 105.0, "°C", "invented workshop limit"),
    ("Limit_other", "limit, other parts", 90.0, "°C", "invented workshop limit"),
    ("Limit_water", "limit, water-cooled conductors", 70.0, "°C", "invented workshop limit: no scale, no boiling"),
    ("Limit_touch", "limit, covers that can be touched", 60.0, "°C", "invented workshop limit"),
)

# name, conductivity W/(m·K), resistivity at 20 °C nΩ·m, its temperature coefficient 1/K, density kg/m³, note
MATERIALS: tuple[tuple[str, float, float | None, float | None, float, str], ...] = (
    ("Copper", 388.0, 17.24, 0.00393, 8890.0, "resistivity: IEC 60028, annealed copper at 20 °C"),
    ("Aluminium", 225.0, 28.3, 0.004, 2700.0, "rounded assumption for conductor grade"),
    ("Stainless steel", 15.0, 720.0, 0.001, 7900.0, "rounded assumption"),
    ("Mild steel", 50.0, None, None, 7850.0, "rounded assumption; heated by eddies"),
    ("Heater filling", 2.0, None, None, 2600.0, "rounded assumption for a packed ceramic filling"),
    ("Potting resin", 0.6, None, None, 1600.0, "rounded assumption for a filled resin"),
    ("Coil layer", 0.8, None, None, 5000.0, "rounded assumption across an impregnated winding"),
)

_STILL: Cells = {"both film": "=Film_still", "both fluid": "=Air_inside"}
_ROUND: Cells = {"both film": "=Film_round", "both fluid": "=Air_inside"}
_FORCED: Cells = {"both film": "=Film_forced", "both fluid": "=Air_inside"}
_GAP: Cells = {
    "left film": "=Film_gap",
    "left fluid": "=Air_gap",
    "right film": "=Film_still",
    "right fluid": "=Air_inside",
}
_OUTER_AIR: Cells = {"right film": "=Film_round", "right fluid": "=Air_inside"}


def _flat(material: str, width: float, thickness: float | str, current: float, cooling: Cells, **more: float | str) -> Cells:
    return {
        "# material": material,
        "# current": current,
        "# resistivity at": 85.0,
        "shape": "wall",
        "width": width,
        "length": "=Bar_length",
        "thickness": thickness,
        "limit": "=Limit_bare",
        **cooling,
        **{name.replace("_", " "): value for name, value in more.items()},
    }


def _round(material: str, inner: float | None, outer: float, current: float, at: float, cooling: Cells, limit: str) -> Cells:
    bore: Cells = {} if inner is None else {"inner diameter": inner}
    end: Cells = {"limit": limit} if limit else {}
    return {
        "# material": material,
        "# current": current,
        "# resistivity at": at,
        "shape": "cylinder",
        "length": "=Bar_length",
        **bore,
        "outer diameter": outer,
        **cooling,
        **end,
    }


def _water(film: str) -> Cells:
    return {"left film": film, "left fluid": "=Water", **_OUTER_AIR}


def _sensor(power: float, air: str) -> Cells:
    return {
        "# material": "Potting resin",
        "shape": "sphere",
        "outer diameter": 60.0,
        "power": power,
        "right film": "=Film_round",
        "right fluid": air,
        "limit": "=Limit_other",
    }


CANDIDATES: tuple[tuple[str, str, Cells], ...] = (
    ("B01", "Flat copper 100 × 10, both faces in still air", _flat("Copper", 100, 10, 1600, _STILL)),
    ("B02", "The same bar as its right half: middle insulated",
     _flat("Copper", 100, 5, 800, {"right film": "=Film_still", "right fluid": "=Air_inside"})),
    ("B03", "Flat copper 100 × 10, left face near the panel wall", _flat("Copper", 100, 10, 1600, _GAP)),
    ("B04", "Flat copper 80 × 10, both faces in still air", _flat("Copper", 80, 10, 1600, _STILL)),
    ("B05", "Flat copper 60 × 10, both faces in still air", _flat("Copper", 60, 10, 1600, _STILL)),
    ("B06", "Flat copper 60 × 10, forced air", _flat("Copper", 60, 10, 1600, _FORCED)),
    ("B07", "Flat aluminium 100 × 10, both faces in still air", _flat("Aluminium", 100, 10, 1250, _STILL)),
    ("B08", "Flat aluminium 120 × 10, left face near the panel wall", _flat("Aluminium", 120, 10, 1600, _GAP)),
    ("B09", "Flat aluminium 80 × 8, forced air", _flat("Aluminium", 80, 8, 1000, _FORCED)),
    ("B10", "Flat copper 100 × 10 outdoors, sun on the left face",
     _flat("Copper", 100, 10, 1600, {"both film": "=Film_outdoor", "both fluid": "=Air_outside"}, left_flux_in="=Sun")),
    ("B11", "Flat copper 80 × 10, hot neighbour on the right", _flat("Copper", 80, 10, 1600, _STILL, right_flux_in="=Neighbour")),
    ("B12", "Flat aluminium 100 × 10, right face covered by insulation",
     _flat("Aluminium", 100, 10, 1000, {"left film": "=Film_still", "left fluid": "=Air_inside"})),
    ("R01", "Round copper Ø 20 in still air", _round("Copper", None, 20, 630, 85, _ROUND, "=Limit_bare")),
    ("R02", "Round copper Ø 30 in still air", _round("Copper", None, 30, 1000, 85, _ROUND, "=Limit_bare")),
    ("R03", "Round aluminium Ø 40 in still air", _round("Aluminium", None, 40, 1000, 70, _ROUND, "=Limit_bare")),
    ("R04", "Round aluminium Ø 25, forced air", _round("Aluminium", None, 25, 1000, 70, _FORCED, "=Limit_bare")),
    ("R05", "Round copper Ø 16, test piece without a limit", _round("Copper", None, 16, 560, 120, _ROUND, "")),
    ("H01", "Hollow copper Ø 30/14, water in the bore",
     _round("Copper", 14, 30, 10000, 45, _water("=Film_water"), "=Limit_water")),
    ("H02", "The same hollow conductor, bore fouled",
     _round("Copper", 14, 30, 10000, 85, _water("=Film_fouled"), "=Limit_water")),
    ("T01", "Stainless lead tube Ø 25/10, bore held at the water",
     _round("Stainless steel", 10, 25, 2000, 60, {"left held": "=Water"}, "=Limit_other")),
    ("T02", "Space heater tube Ø 40/20, given by its line power",
     {"# material": "Heater filling", "shape": "cylinder", "length": "=Bar_length", "inner diameter": 20.0,
      "outer diameter": 40.0, "line power": 50.0, **_OUTER_AIR, "limit": "=Limit_other"}),
    ("S01", "Potted current sensor Ø 60, 3 W", _sensor(3.0, "=Air_inside")),
    ("S02", "The same sensor in the outlet air, 20 K warmer", _sensor(3.0, "=Air_inside+20")),
    ("C01", "Coil layer 30 mm, left face held by the cooled plate",
     {"# material": "Coil layer", "shape": "wall", "width": 200.0, "length": 200.0, "thickness": 30.0, "power": 90.0,
      "left held": "=Plate", "right film": "=Film_still", "right fluid": "=Air_inside", "limit": "=Limit_other"}),
    ("C02", "Coil layer 25 mm, given by its heat per mass",
     {"# material": "Coil layer", "shape": "wall", "width": 200.0, "length": 200.0, "thickness": 25.0,
      "specific generation": 23.0, "left held": "=Plate", "limit": "=Limit_other"}),
    ("E01", "Steel cover plate 5 mm with eddy heat",
     {"# material": "Mild steel", "shape": "wall", "width": 600.0, "length": 800.0, "thickness": 5.0, "generation": 55.0,
      **_STILL, "limit": "=Limit_touch"}),
    ("X01", "Deliberately wrong: the thickness is a text", _flat("Copper", 80, "12,5", 1600, _STILL)),
    ("X02", "Deliberately wrong: a film without its fluid", _flat("Copper", 80, 10, 1600, {"both film": "=Film_still"})),
)  # fmt: skip
