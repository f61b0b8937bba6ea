"""From one row's cells to a model, in the wider scope."""

from __future__ import annotations

import math
import re
from collections.abc import Sequence

from . import headings2 as h
from . import tabletext, units
from .finite_volume import CYLINDER, SPHERE, WALL
from .laws import TWENTY, Law
from .model import BAR, SOLID_CURRENT, WOUND, Layer, Model, Skin, Source
from .rows import IMPOSSIBLE, NEEDED, PLACE_SLACK, WRONG, RefusedError, is_blank, is_error

Points = tuple[tuple[float, float], ...]
Value = float | str | Points
SHAPES = {"wall": WALL, "cylinder": CYLINDER, "sphere": SPHERE, "bar": BAR}
TABLED = ("conductivity", "generation", "resistivity")
SIDE = ("section", "perimeter", "side film", "side fluid", "side emissivity", "side surroundings")
CONTACTS = ("left contact", "right contact")
USELESS: dict[int, tuple[str, ...]] = {
    WALL: ("inner radius", "inner diameter", "outer radius", "outer diameter", "radius", "diameter", *SIDE, *CONTACTS),
    CYLINDER: ("width", "area", *SIDE, *CONTACTS),
    SPHERE: ("width", "area", "length", "line power", "turns", "fill factor", *h.CURRENTS, *SIDE, *CONTACTS),
    BAR: ("inner radius", "inner diameter", "outer radius", "outer diameter", "radius", "area", "turns", "fill factor"),
}
POSITIVE = (
    *("thickness", "outer radius", "outer diameter", "radius", "diameter", "conductivity", "density", "length", "width"),
    *("area", "section", "perimeter", "resistivity", "turns", "fill factor", "ac ratio"),
)
NOT_NEGATIVE = ("inner radius", "inner diameter", "film", "emissivity", "resistance", "joint", "contact")
KELVIN = ("held", "fluid", "surroundings", "limit", "reference")
ELECTRIC = ("resistivity", "resistivity slope", "resistivity reference", "ac ratio", "turns", "fill factor")


def stem(name: str) -> str:
    """A name without its layer or its side."""
    found = re.fullmatch(r"(.*\S) \d+", name)
    bare = found[1] if found else name
    side, _, rest = bare.partition(" ")
    return rest if side in ("left", "right", "side") and rest else bare


def _value(col: h.Column, name: str, cell: object) -> Value:
    if col.kind == "text":
        if not isinstance(cell, str):
            raise RefusedError(WRONG)
        return " ".join(cell.split()).lower()
    if isinstance(cell, str) and ":" in cell and stem(name) in TABLED:
        try:
            return tabletext.points(cell, col.unit)
        except tabletext.TableError as error:
            raise RefusedError(WRONG) from error
    if isinstance(cell, bool) or not isinstance(cell, (int, float)):
        raise RefusedError(WRONG)
    if not math.isfinite(cell):
        raise RefusedError(IMPOSSIBLE)
    value = units.to_si(float(cell), col.unit)
    if col.kind == "film" and stem(name) in ("resistance", "joint"):
        return 1.0 / value if value > 0.0 else -1.0  # a conductance; none at all is refused
    return value


class Cells:
    """One row's inputs by name."""

    def __init__(self, columns: Sequence[h.Column], cells: Sequence[object]) -> None:
        pairs = zip(columns, cells, strict=True)
        filled = [(col, cell) for col, cell in pairs if col.what != "skip" and not is_blank(cell)]
        for _, cell in filled:
            if is_error(cell):
                raise RefusedError(str(cell).strip(), exact=True)
        if any(col.what == "bad" for col in columns):
            raise RefusedError(WRONG)
        if any(col.what == "later" for col, _ in filled):
            raise RefusedError(NEEDED, exact=True)
        shape = next((str(cell).strip().lower() for col, cell in filled if "shape" in col.inputs), "")
        bores = [cell for col, cell in filled if col.inputs[0] in ("inner radius", "inner diameter")]
        solid = shape in ("cylinder", "sphere") and all(cell == 0 for cell in bores)
        self.row: dict[str, Value] = {}
        self.bare = {col.inputs[0] for col, _ in filled if not col.numbered}
        impossible = False
        for col, cell in filled:
            for name in col.inputs[1:] if col.both and solid else col.inputs:
                if name in self.row:
                    raise RefusedError(WRONG)
                try:
                    self.row[name] = _value(col, name, cell)
                except RefusedError as refused:
                    if refused.error != IMPOSSIBLE:
                        raise
                    impossible, self.row[name] = True, 0.0
        if impossible:
            raise RefusedError(IMPOSSIBLE)
        self.source_columns = [col for col in columns if col.source]
        self.errors: list[str] = []

    @classmethod
    def of(cls, row: dict[str, Value]) -> Cells:
        """Of inputs already in SI."""
        made = cls.__new__(cls)
        made.row, made.bare, made.source_columns, made.errors = dict(row), set(), [], []
        return made

    def has(self, name: str) -> bool:
        return name in self.row

    def number(self, name: str, otherwise: float = 0.0) -> float:
        """The value; one that is refused anyway (of a positive input) counts as 1, so that the checks can go on."""
        value = self.row.get(name, otherwise)
        if not isinstance(value, float):
            return otherwise
        return 1.0 if value <= 0.0 and stem(name) in POSITIVE else value

    def maybe(self, name: str) -> float | None:
        return self.number(name) if name in self.row else None

    def need(self, *names: str) -> None:
        if any(name not in self.row for name in names):
            self.errors.append(NEEDED)

    def fail(self) -> None:
        """Raises the gravest error in meaning."""
        for error in (WRONG, NEEDED, IMPOSSIBLE):
            if error in self.errors:
                raise RefusedError(error)


def _possible(cells: Cells) -> None:
    for name, value in cells.row.items():
        bare = stem(name)
        if isinstance(value, tuple):
            low = min(v for _, v in value)
            if min(t for t, _ in value) < 0.0 or (bare != "generation" and low <= 0.0):
                cells.errors.append(IMPOSSIBLE)
        elif isinstance(value, float):
            cold = value < 0.0 and (bare in KELVIN or bare.endswith(" reference"))
            if cold or (bare in POSITIVE and value <= 0.0) or (bare in NOT_NEGATIVE and value < 0.0):
                cells.errors.append(IMPOSSIBLE)
            above = bare in ("emissivity", "fill factor") and value > 1.0
            if above or (bare == "ac ratio" and value < 1.0):
                cells.errors.append(IMPOSSIBLE)


def _layers(cells: Cells) -> int:
    count = 1
    for name in cells.row:
        found = re.fullmatch(r"(.*\S) (\d+)", name)
        if found:
            count = max(count, int(found[2]) + (1 if found[1] == "joint" else 0))
    return count


def _sizes(cells: Cells, count: int) -> tuple[float, list[float]]:
    """Bore and the layers' thicknesses."""
    bores = [name for name in ("inner radius", "inner diameter") if cells.has(name)]
    round_names = [name for name in ("radius", "diameter") if cells.has(name)]
    if len(bores) > 1 or (round_names and (bores or count > 1)):
        cells.errors.append(WRONG)
    if count > 1 and any(name in cells.bare for name in ("outer radius 1", "outer diameter 1")):
        cells.errors.append(WRONG)
    bore = cells.number(bores[0]) * (0.5 if "diameter" in bores[0] else 1.0) if bores else 0.0
    edge, sizes = bore, []
    for n in range(1, count + 1):
        names = [f"{name} {n}" for name in ("thickness", "outer radius", "outer diameter") if cells.has(f"{name} {n}")]
        names += round_names if n == 1 else []
        if len(names) > 1:
            cells.errors.append(WRONG)
        if not names:
            cells.errors.append(NEEDED)
            sizes.append(1.0)
            continue
        size = cells.number(names[0]) * (0.5 if "diameter" in names[0] else 1.0)
        size = size if "thickness" in names[0] else size - edge
        if size <= 0.0:
            cells.errors.append(IMPOSSIBLE)
            size = 1.0
        sizes.append(size)
        edge += size
    return bore, sizes


def _bar(cells: Cells) -> tuple[float, float]:
    """Section and perimeter."""
    cells.need("length")
    ways = [any(cells.has(n) for n in names) for names in (("section", "perimeter"), ("width", "thickness 1"), ("diameter",))]
    if sum(ways) > 1:
        cells.errors.append(WRONG)
    sided = cells.has("side film") or cells.has("side emissivity")
    if ways[0]:
        cells.need("section", *(["perimeter"] if sided else []))
        return cells.number("section", 1.0), cells.number("perimeter", 0.0)
    if ways[2]:
        size = cells.number("diameter")
        return math.pi * size * size / 4, math.pi * size
    cells.need("width", "thickness 1")
    width, thick = cells.number("width", 1.0), cells.number("thickness 1", 1.0)
    return width * thick, 2 * (width + thick)


def _skin(cells: Cells, side: str) -> Skin:
    names = ("held", "film", "fluid", "emissivity", "surroundings", "flux in", "resistance")
    got = {name: cells.maybe(f"{side} {name}") for name in names}
    held, film, fluid, resistance = got["held"], got["film"], got["fluid"], got["resistance"]
    contact = cells.number(f"{side} contact")
    if held is not None:
        if any(got[name] is not None for name in ("film", "fluid", "emissivity", "surroundings", "flux in")):
            cells.errors.append(WRONG)
        return Skin(held=held, resistance=resistance, contact=contact)
    if film is not None and fluid is None:
        cells.errors.append(NEEDED)
    if got["surroundings"] is not None and got["emissivity"] is None:
        cells.errors.append(NEEDED)
    if got["emissivity"] is not None and got["surroundings"] is None and fluid is None:
        cells.errors.append(NEEDED)
    if fluid is not None and film is None:
        if resistance is None or got["emissivity"] is not None or got["flux in"] is not None:
            cells.errors.append(NEEDED)
        return Skin(held=fluid, resistance=resistance, contact=contact)
    if resistance is not None and film is None and got["emissivity"] is None:
        cells.errors.append(NEEDED)
    around = got["surroundings"] if got["surroundings"] is not None else fluid
    flux = got["flux in"] or 0.0
    return Skin(None, film or 0.0, fluid, got["emissivity"] or 0.0, around, flux, resistance, contact)


def _law(cells: Cells, name: str, n: int, slopes: str = "") -> Law:
    """The law of a numbered property with its slope and reference."""
    value = cells.row.get(f"{name} {n}", 1.0)
    slope = f"{slopes or name} slope {n}"
    if isinstance(value, tuple):
        if cells.has(slope):
            cells.errors.append(WRONG)
        return Law(table=value)
    base = value if isinstance(value, float) else 1.0
    return Law(base, cells.number(slope), cells.number(f"{slopes or name} reference {n}", TWENTY))


def _volumetric(cells: Cells, body: Model, kind: str, n: int, blank: bool) -> Source:
    layer, name = body.layers[n - 1], f"{kind} {n}"
    value = cells.row.get(name, 1.0)
    law = Law(1.0, cells.number(f"generation slope {n}"), cells.number(f"generation reference {n}", TWENTY))
    if isinstance(value, tuple):
        if cells.has(f"generation slope {n}"):
            cells.errors.append(WRONG)
        return Source(kind, 1.0, 1.0, Law(table=value), has_table=True)
    given = value if isinstance(value, float) else 1.0
    whole = body.volume(layer.start, layer.start + layer.thickness)
    per = 1.0
    if kind == "specific generation":
        cells.need(f"density {n}")
        per = cells.number(f"density {n}", 1.0)
    elif kind == "power":
        extent = {WALL: "area", CYLINDER: "length"}.get(body.shape)
        if extent:
            cells.need(extent)
        per = 1.0 / (whole * (cells.number(extent, 1.0) if extent else 1.0))
    elif kind == "line power":
        if body.shape == WALL:
            cells.errors.append(NEEDED)
        per = 1.0 / (body.section if body.shape == BAR else whole)
    if kind in ("power", "line power") and cells.has(f"generation slope {n}"):
        cells.errors.append(WRONG)
    return Source(kind, given, given * per, law, blank=blank)


def _electric(cells: Cells, body: Model, kind: str, n: int, blank: bool) -> Source:
    layer, shape = body.layers[n - 1], body.shape
    cells.need(f"resistivity {n}")
    law = _law(cells, "resistivity", n)
    given = cells.number(f"{kind} {n}", 1.0)
    ac, fill = cells.number(f"ac ratio {n}", 1.0), cells.number(f"fill factor {n}", 1.0)
    turns, thick, long = cells.number(f"turns {n}", 1.0), layer.thickness, cells.number("length", 1.0)
    if kind == "voltage":
        cells.need("length")
    size, whole, electric = abs(given), False, SOLID_CURRENT
    if kind == "voltage":
        size /= ac  # the resistance is that of alternating current
    if shape == BAR:
        electric = WOUND
        size *= {"current": 1.0 / body.section, "voltage": body.section}.get(kind, 1.0)
        whole = kind == "voltage"
    elif cells.has(f"turns {n}") or cells.has(f"fill factor {n}"):
        electric = WOUND
        if kind != "current density":
            cells.need(f"turns {n}")
        if kind == "current":
            across = "length" if shape == CYLINDER else "width"
            cells.need(across)
            size *= turns / (fill * thick * cells.number(across, 1.0))
        elif kind == "voltage":
            size, whole = size * thick / (turns * (1.0 if shape == CYLINDER else long)), True
    elif kind == "voltage":
        size /= long
    else:
        whole = True
        if kind == "current density":
            size *= body.volume(layer.start, layer.start + thick)
        elif shape == WALL:
            cells.need("width")
            size /= cells.number("width", 1.0)
    return Source(kind, given, size, law, electric, whole, ac, fill if electric == WOUND else 1.0, blank)


def _sources(cells: Cells, body: Model) -> dict[int, Source]:
    out: dict[int, Source] = {}
    count = len(body.layers)
    kinds = {n: [kind for kind in h.SOURCES if cells.has(f"{kind} {n}")] for n in range(1, count + 1)}
    blank = False
    if not any(kinds.values()):
        columns = cells.source_columns
        name = columns[0].inputs[0] if len(columns) == 1 and columns[0].inputs else ""
        if name and int(name.rpartition(" ")[2]) <= count:
            blank = True
            kinds[int(name.rpartition(" ")[2])] = [name.rpartition(" ")[0]]
        else:
            cells.errors.append(NEEDED)
            return {}
    for n, names in kinds.items():
        if len(names) > 1:
            cells.errors.append(WRONG)
        kind = names[0] if names else ""
        if kind not in h.CURRENTS and any(cells.has(f"{name} {n}") for name in ELECTRIC):
            cells.errors.append(WRONG)
        if (not kind or kind in h.CURRENTS) and cells.has(f"generation slope {n}"):
            cells.errors.append(WRONG)
        if kind:
            make = _electric if kind in h.CURRENTS else _volumetric
            out[n - 1] = make(cells, body, kind, n, blank)
    if any(cells.has(name) for name in CONTACTS) and not any(one.electric for one in out.values()):
        cells.errors.append(WRONG)
    return out


def build(cells: Cells) -> Model:
    """The row's model; every error is collected and the gravest in meaning is raised."""
    row = cells.row
    if "shape" in row and row["shape"] not in SHAPES:
        raise RefusedError(WRONG)
    _possible(cells)
    if "shape" not in row:
        raise RefusedError(NEEDED)
    shape, count = SHAPES[str(row["shape"])], _layers(cells)
    if shape == BAR and count > 1:
        raise RefusedError(NEEDED, exact=True)
    if any(name in USELESS[shape] or stem(name) in USELESS[shape] for name in row if not name.startswith("side ")):
        cells.errors.append(WRONG)
    if shape != BAR and any(name in SIDE for name in row):
        cells.errors.append(WRONG)
    section, perimeter = _bar(cells) if shape == BAR else (1.0, 0.0)
    bore, sizes = (0.0, [cells.number("length", 1.0)]) if shape == BAR else _sizes(cells, count)
    left, right = _skin(cells, "left"), _skin(cells, "right")
    side = _skin(cells, "side") if shape == BAR else Skin()
    if shape in (CYLINDER, SPHERE) and bore == 0.0 and any(name.startswith("left ") for name in row):
        cells.errors.append(WRONG)
    starts = [sum(sizes[:i]) for i in range(count)]
    cells.need(*(f"conductivity {n}" for n in range(1, count + 1)))
    laws = [_law(cells, "conductivity", n) for n in range(1, count + 1)]
    layers = tuple(Layer(a, t, k) for a, t, k in zip(starts, sizes, laws, strict=True))
    joints = tuple(cells.number(f"joint {n}") for n in range(1, count))
    body = Model(shape, bore, layers, joints, left, right, side, section or 1.0, perimeter)
    sane = IMPOSSIBLE not in cells.errors
    sources = _sources(cells, body) if sane else _sources(cells, Model(shape, bore, layers, joints))
    if not any(skin.cools for skin in (left, right, side)):
        cells.errors.append(IMPOSSIBLE)
    cells.fail()
    layers = tuple(
        Layer(one.start, one.thickness, one.conductivity, sources.get(i), cells.maybe(f"turns {i + 1}") or 0.0)
        for i, one in enumerate(layers)
    )
    return Model(shape, bore, layers, joints, left, right, side, section, perimeter)


def probe_place(model: Model, cells: Cells) -> float | None:
    if not cells.has("probe"):
        return None
    place = cells.number("probe") - model.inner
    slack = PLACE_SLACK * (model.inner + model.thickness)
    if not -slack <= place <= model.thickness + slack:
        raise RefusedError(IMPOSSIBLE)
    return min(max(place, 0.0), model.thickness)
