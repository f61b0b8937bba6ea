"""The one table of headings: every input a row may hold and every answer that may be asked.

Reading headings, checking values, the reference and the registrations all derive from it. A quantity is added by a row
here and its name in the solver. Ranges are in the base unit of the kind (SI; temperatures °C) and wider than anything
built: beyond them a value is a slip of unit or of the keyboard.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import Enum

from ingle_addin.units import Kind

ABSOLUTE_ZERO = -273.15


class Where(Enum):
    """What a heading belongs to, which decides the words and numbers that may stand with its name."""

    BODY = "the body"
    LAYER = "a layer"  # a number ending the name says which
    FACE = "a face"  # left or inner, right or outer, or both, before the name
    FACE_AND_SIDE = "a face, or the sides of a bar"
    FACE_AND_LAYER = "a face, a layer, or anywhere in the body"  # limit
    JOINT = "a joint between layers"  # numbered as the layer before it


@dataclass(frozen=True)
class Input:
    """One input heading. ``lowest`` is allowed itself unless ``above``; ``texts`` are the words a text heading knows."""

    name: str
    kinds: tuple[Kind, ...]
    meaning: str
    where: Where = Where.BODY
    lowest: float = 0.0
    highest: float = 1e6
    above: bool = True
    texts: tuple[str, ...] = ()
    table: bool = False  # a text table in temperature may stand instead of a number
    available: bool = False


@dataclass(frozen=True)
class Answer:
    """One answer heading; ``quantity`` is the solver's name for it, or a word of ``ingle_addin.answers``."""

    name: str
    kinds: tuple[Kind, ...]
    meaning: str
    where: Where = Where.BODY
    quantity: str = ""

    @property
    def available(self) -> bool:
        """Whether the physics behind it is there."""
        return bool(self.quantity)


SHAPES = ("wall", "cylinder", "sphere", "bar")
FILM_LAWS = (
    "vertical plate",
    "horizontal cylinder",
    "sphere",
    "hot face up",
    "hot face down",
    "cylinder in cross flow",
    "plate in flow",
    "tube flow",
)
_L, _T, _N = (Kind.LENGTH,), (Kind.TEMPERATURE,), (Kind.RATIO,)
_PER_K, _TEXT = (Kind.PER_TEMPERATURE,), (Kind.TEXT,)
_LAYER, _FACE, _BOTH = Where.LAYER, Where.FACE, Where.FACE_AND_SIDE


def _temperature(name: str, meaning: str, where: Where = Where.BODY, available: bool = False) -> Input:
    return Input(name, _T, meaning, where, ABSOLUTE_ZERO, 1e5, above=False, available=available)


INPUTS: tuple[Input, ...] = (
    Input("shape", _TEXT, "wall, cylinder, sphere, or bar (along a bar between terminals)", texts=SHAPES, available=True),
    Input("thickness", _L, "of a wall, or of a layer of any shape; the radius of a solid round body", _LAYER, available=True),
    Input("inner radius", _L, "bore of a round body; blank or 0 is solid", above=False, available=True),
    Input("inner diameter", _L, "bore of a round body; blank or 0 is solid", above=False, available=True),
    Input("outer radius", _L, "outside of a layer, instead of its thickness", _LAYER, available=True),
    Input("outer diameter", _L, "outside of a layer, instead of its thickness", _LAYER, available=True),
    Input("radius", _L, "of a solid body of one layer", available=True),
    Input("diameter", _L, "of a solid body of one layer", available=True),
    Input("length", _L, "along a cylinder's axis or a bar's heat path", available=True),
    Input("width", _L, "of a wall, across the current", available=True),
    Input("area", (Kind.AREA,), "of a wall's face", highest=1e12, available=True),
    Input("section", (Kind.AREA,), "of a bar", highest=1e12, available=True),
    Input("perimeter", _L, "of a bar's section", available=True),
    Input("conductivity", (Kind.CONDUCTIVITY,), "a number, or a text table in temperature", _LAYER, table=True, available=True),
    Input("conductivity slope", _PER_K, "k = k₀[1 + slope (T − reference)]", _LAYER, -1e3, 1e3, above=False, available=True),
    _temperature("conductivity reference", "of the slope; 20 °C if blank", _LAYER, available=True),
    Input("material", _TEXT, "a row of the bundled materials table", _LAYER),
    Input("generation", (Kind.GENERATION,), "heat per volume; a number or a text table", _LAYER, -1e25, 1e25, above=False,
          table=True, available=True),
    Input("specific generation", (Kind.SPECIFIC_GENERATION,), "heat per mass, with density", _LAYER, -1e22, 1e22,
          above=False, available=True),
    Input("power", (Kind.POWER,), "spread evenly over the layer's volume; needs the area of a wall or the length of a "
          "cylinder", _LAYER, -1e15, 1e15, above=False, available=True),
    Input("line power", (Kind.LINE_POWER,), "spread evenly over each metre of a cylinder", _LAYER,
          -1e15, 1e15, above=False, available=True),
    Input("current", (Kind.CURRENT,), "along the layer of a wall or cylinder, or along a bar", _LAYER, -1e12, 1e12, False,
          available=True),
    Input("voltage", (Kind.VOLTAGE,), "along the length, instead of a current", _LAYER, -1e12, 1e12, False, available=True),
    Input("current density", (Kind.CURRENT_DENSITY,), "in the conductor: of a solid one the mean over its section", _LAYER, -1e15,
          1e15, False, available=True),
    Input("turns", _N, "of a winding", _LAYER, 0.0, 1e9, available=True),
    Input("fill factor", _N, "share of a winding's section that is conductor; 1 if blank", _LAYER, 0.0, 1.0, available=True),
    Input("resistivity", (Kind.RESISTIVITY,), "a number, or a text table in temperature", _LAYER, table=True, available=True),
    Input("resistivity slope", _PER_K, "ρ = ρ₀[1 + slope (T − reference)]", _LAYER, -1e3, 1e3, False, available=True),
    _temperature("resistivity reference", "of the slope; 20 °C if blank", _LAYER, available=True),
    Input("ac ratio", _N, "AC to DC resistance ratio, at least 1; 1 if blank", _LAYER, 1.0, 1e6, False, available=True),
    Input("contact", (Kind.RESISTANCE,), "of a bar's joint: its I²R enters at that end", _FACE, 0.0, 1e6, False,
          available=True),
    Input("generation slope", _PER_K, "q = q₀[1 + slope (T − reference)]", _LAYER, -1e3, 1e3, False, available=True),
    _temperature("generation reference", "of the slope (20 °C if blank) or of the activation energy", _LAYER, available=True),
    Input("activation energy", (Kind.MOLAR_ENERGY,), "q = q₀ exp[−E/R (1/T − 1/T_ref)], kelvin", _LAYER, 0.0, 1e8, False),
    Input("beam flux", (Kind.HEAT_FLUX,), "walls: q = μ Φ e^(−μ s)", Where.BODY, 0.0, 1e15, False),
    Input("absorption coefficient", (Kind.ATTENUATION,), "of a beam, or of a generation that decays", _LAYER, 0.0, 1e12, False),
    Input("beam enters", _TEXT, "left (if blank), right or both", texts=("left", "right", "both")),
    Input("joint", (Kind.AREA_RESISTANCE, Kind.FILM), "between two layers, per area where they meet", Where.JOINT, 0.0, 1e20,
          False, available=True),
    _temperature("held", "temperature the face is held at", _FACE, available=True),
    Input("flux in", (Kind.HEAT_FLUX,), "heat put into the body at that surface; may stand beside a film", _FACE, -1e20,
          1e20, above=False, available=True),
    Input("film", (Kind.FILM,), "convection coefficient, with its fluid", _BOTH, 0.0, 1e20, above=False, available=True),
    _temperature("fluid", "temperature of the fluid, with its film", _BOTH, available=True),
    Input("emissivity", _N, "radiation to large surroundings", _BOTH, 0.0, 1.0, False, available=True),
    _temperature("surroundings", "of the radiation; the fluid's temperature if blank", _BOTH, available=True),
    Input("resistance", (Kind.AREA_RESISTANCE, Kind.FILM), "between the face and its outermost surface", _FACE, 0.0, 1e20,
          False, available=True),
    Input("film law", _TEXT, "film coefficient by a published law", _BOTH, texts=FILM_LAWS, available=True),
    Input(
        "size",
        _L,
        "of a film law: height, diameter, length along the flow; area over perimeter of a hot face; own diameter if blank",
        _BOTH,
        available=True,
    ),
    Input("speed", (Kind.SPEED,), "of a film law", _BOTH, 0.0, 1e4, False, available=True),
    Input("fluid kind", _TEXT, "air (1 atm) if blank, or water", _BOTH, texts=("air", "water"), available=True),
    _temperature("limit", "highest allowed anywhere, in a numbered layer, or at a face", Where.FACE_AND_LAYER, True),
    Input("probe", _L, "place where a temperature is asked: from the left face, or the radius", above=False, available=True),
    Input("density", (Kind.DENSITY,), "of the layer, for times and W/kg", _LAYER, available=True),
    Input("specific heat", (Kind.SPECIFIC_HEAT,), "of the layer, for times", _LAYER, 0.0, 1e9, available=True),
    Input("heat available", (Kind.ENERGY_DENSITY,), "of a source that runs out", _LAYER, 0.0, 1e15),
    Input("overload", _N, "factor on the row's source heading, for the overload time"),
    _temperature("start", "uniform starting temperature; the coldest sink if blank"),
)  # fmt: skip

# The headings of which a layer takes one, and the answer that turns the question round.
CURRENTS = ("current", "voltage", "current density")
SOURCES = ("generation", "specific generation", "power", "line power", *CURRENTS)
_HEATS = (Kind.HEAT_FLUX, Kind.LINE_POWER, Kind.POWER)
_DIFFERENCE, _PERCENT = (Kind.TEMPERATURE_DIFFERENCE,), (Kind.PERCENT,)
_SOURCE_KINDS = {
    "generation": Kind.GENERATION,
    "specific generation": Kind.SPECIFIC_GENERATION,
    "power": Kind.POWER,
    "line power": Kind.LINE_POWER,
    "current": Kind.CURRENT,
    "voltage": Kind.VOLTAGE,
    "current density": Kind.CURRENT_DENSITY,
}

ANSWERS: tuple[Answer, ...] = (
    Answer("peak", _T, "highest temperature; with a number, of that layer", _LAYER, "peak"),
    Answer("peak place", _L, "where it is: from the left face, or the radius", quantity="peak_place"),
    Answer("peak layer", _N, "the layer it is in", quantity="peak_layer"),
    Answer("face", _T, "temperature of the left (inner) or right (outer) face", _FACE, "face"),
    Answer("mean", _T, "mean over the volume; with a number, of that layer", _LAYER, "mean"),
    Answer("probe temperature", _T, "temperature at the probe", quantity="probe_temperature"),
    Answer("joint left", _T, "temperature on the left of a joint: joint 1 left", Where.JOINT, "joint_left"),
    Answer("joint right", _T, "temperature on the right of a joint: joint 1 right", Where.JOINT, "joint_right"),
    Answer("heat out", _HEATS, "net heat leaving through a face: W/m² of that face, W/m or W by the unit", _FACE, "heat out"),
    Answer("side heat out", _HEATS, "heat leaving through a bar's sides", quantity="side heat out"),
    Answer("heat made", _HEATS, "heat generated: W/m² of a wall, W/m or W by the unit", quantity="heat made"),
    Answer("left share", _PERCENT, "of all heat leaving, what leaves on the left", quantity="left_share"),
    Answer("balance", _PERCENT, "imbalance over the largest of heat made, taken in and passing through", quantity="balance"),
    Answer("film used", (Kind.FILM,), "film coefficient that a law gave", _FACE, "film used"),
    Answer("voltage", (Kind.VOLTAGE,), "along the length, or of all turns, of the row's current", quantity="voltage"),
    Answer(
        "resistance",
        (Kind.RESISTANCE,),
        "along the length, or of all turns, at the row's temperatures; with its AC ratio",
        quantity="resistance",
    ),
    *(
        Answer(
            f"allowable {source}",
            (kind,),
            f"{source} at which the first limit is reached",
            quantity=f"allowable {source}",
        )
        for source, kind in _SOURCE_KINDS.items()
    ),
    Answer("limited by", _TEXT, "the limit that governs the allowable source", quantity="limited by"),
    Answer("headroom", _DIFFERENCE, "kelvin left before the first limit, negative beyond it", quantity="headroom"),
    Answer("utilisation", _PERCENT, "of the allowable source now used", quantity="utilisation"),
    *(
        Answer(f"runaway {source}", (kind,), f"{source} above which the state reached from cold no longer exists")
        for source, kind in _SOURCE_KINDS.items()
    ),
    Answer("runaway utilisation", _PERCENT, "of the runaway source now used"),
    Answer("runaway margin", _DIFFERENCE, "how many kelvin hotter all fluids, surroundings and held faces may be"),
    Answer("peak low", _T, "2.5 percentile of the peak"),
    Answer("peak high", _T, "97.5 percentile of the peak"),
    Answer("peak sd", _DIFFERENCE, "standard uncertainty of the peak"),
    Answer("chance over limit", _PERCENT, "share of the spread beyond a limit"),
    Answer("main doubt", _TEXT, "the input that matters most"),
    Answer("doubt share", _PERCENT, "its share of the variance"),
    Answer("allowable low", tuple(_SOURCE_KINDS.values()), "the allowable that holds with 95 % confidence"),
    Answer("settling time", (Kind.TIME,), "until the peak has made 95 % of its way from the start"),
    Answer("overload time", (Kind.TIME,), "from steady to the first limit after the overload"),
    Answer("verdict", _TEXT, "ok, caution, over limit, no limit, runaway or no answer", quantity="verdict"),
    Answer("why", _TEXT, "ok, or one sentence: missing, wrong, doubtful, or why there is no answer", quantity="why"),
)
