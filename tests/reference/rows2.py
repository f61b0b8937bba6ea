"""Answers of a row of the wider scope, each with its error."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from functools import cached_property

from . import headings2 as h
from .build2 import Cells, build, probe_place
from .chain import StuckError
from .finite_volume import CYLINDER, WALL
from .model import BAR, SOLID_CURRENT, Model, Source, emptied
from .rows import IMPOSSIBLE, NEEDED, NO_HEAT, RefusedError
from .solution import BASE, Found, NothingError, RunawayError, Solution

RELATIVE = 1e-6
RUNAWAY = "runaway"


@dataclass(frozen=True)
class End:
    """Where the row's scaled sources come to their end."""

    name: str  # a limit, "runaway", BASE, or "" for nowhere
    scale: float
    error: float
    rate: float  # kelvin of the limit's temperature for one of the scale


def _exact(value: float | str) -> tuple[float | str, float]:
    return value, 0.0


class Row2:
    def __init__(self, cells: Cells) -> None:
        self.cells = cells
        self._ends: dict[str, End] = {}
        self.model = build(cells)
        self.probe = probe_place(self.model, cells)
        self.blank = any(source.blank for _, source in self.model.sources)
        now = emptied(self.model) if self.blank else self.model
        self.now = Solution(now, self.probe)
        self.runaway = False
        try:
            if self.now.lowest < 0.0:
                raise RefusedError(IMPOSSIBLE)
        except NothingError as nothing:
            raise RefusedError(IMPOSSIBLE) from nothing
        except RunawayError:
            self.runaway = True

    # --- limits and the sources' scale ---

    @cached_property
    def limits(self) -> dict[str, float]:
        names = ["limit", *(f"limit {n}" for n in range(1, h.MOST_LAYERS + 1)), "left limit", "right limit"]
        return {name: self.cells.number(name) for name in names if self.cells.has(name)}

    def reporting(self, kind: str) -> tuple[int, Source] | None:
        """The layer whose source of this kind the allowable tells: the first with a number other than 0."""
        mine = [(i, source) for i, source in self.model.sources if source.kind == kind]
        told = [(i, source) for i, source in mine if source.given != 0.0 and not source.has_table]
        if told:
            return told[0]
        return mine[0] if len(mine) == 1 and not mine[0][1].has_table else None

    def _scaled_model(self, kind: str) -> Model:
        """The row's model with the group at the size that the scale 1 means."""
        told = self.reporting(kind)
        if told is None or (told[1].given > 0.0 and not told[1].blank) or (told[1].electric and told[1].given):
            return self.model
        layers = list(self.model.layers)
        for i, source in self.model.sources:
            if source.kind != kind:
                continue
            if told[1].given == 0.0 or told[1].blank:
                # nothing there: one unit of the heading instead
                layers[i] = build(Cells.of({**self.cells.row, f"{kind} {i + 1}": 1.0})).layers[i]
            else:
                layers[i] = replace(layers[i], source=replace(source, given=-source.given, size=-source.size))
        return replace(self.model, layers=tuple(layers))

    @property
    def kind(self) -> str:
        """The kind of the first layer's source that has one."""
        return self.model.sources[0][1].kind

    def end(self, kind: str) -> End:
        if kind not in self._ends:
            self._ends[kind] = self._find_end(kind)
        return self._ends[kind]

    def _find_end(self, kind: str) -> End:
        group = frozenset(i for i, source in self.model.sources if source.kind == kind)
        if not self.limits or not group:
            raise RefusedError(NEEDED)
        sized = [source for _, source in self.model.sources if source.kind == kind]
        if self.reporting(kind) is None and all(source.given == 0.0 for source in sized):
            raise RefusedError(NEEDED)
        try:
            name, scale, rate = Solution(self._scaled_model(kind)).end(group, self.limits)
        except (RunawayError, NothingError) as error:
            raise RefusedError(IMPOSSIBLE) from error
        return End(name, scale.value, scale.error, rate)

    def _scale(self, kind: str) -> tuple[float, float]:
        """The allowable scale of the heat and its error."""
        end = self.end(kind)
        if end.name in ("", BASE):
            raise RefusedError(IMPOSSIBLE)
        heat = 0.0
        if end.rate > 0.0:
            values = [*self.limits.values(), *self.model.sinks]
            heat = (max(values) - min(values)) / end.rate
        return end.scale, RELATIVE * (end.scale + heat) + 10 * end.error

    def allowable(self, kind: str) -> tuple[float, float]:
        self.end(kind)
        told = self.reporting(kind)
        if told is None:
            raise RefusedError(NEEDED)
        scale, error = self._scale(kind)
        unit = 1.0 if told[1].blank or told[1].given == 0.0 else abs(told[1].given)
        if told[1].electric:
            root = math.sqrt(scale)
            return unit * root, unit * (error / (2 * root) if root > 0.0 else math.sqrt(error))
        return unit * scale, unit * error

    def utilisation(self) -> tuple[float, float]:
        kind = self.kind
        self.end(kind)
        told = self.reporting(kind)
        if told is not None:
            allowed, error = self.allowable(kind)
            if allowed == 0.0:
                raise RefusedError(IMPOSSIBLE)
            now = 0.0 if told[1].blank else told[1].given
            return now / allowed, abs(now) / allowed * error / allowed
        scale, error = self._scale(kind)
        if scale == 0.0:
            raise RefusedError(IMPOSSIBLE)
        return 1.0 / scale, error / scale**2

    def margin(self, name: str) -> Found:
        got = self.state().watch(name)
        return Found(self.limits[name] - got.value, self._kelvin(got))

    def nearest(self) -> str:
        return min(self.limits, key=lambda name: self.margin(name).value)

    def limited_by(self) -> str:
        end = self.end(self.kind)
        return self.nearest() if end.name in ("", BASE) else end.name

    # --- the present state ---

    def state(self) -> Solution:
        if self.runaway:
            raise RefusedError(IMPOSSIBLE)
        return self.now

    def _kelvin(self, got: Found) -> float:
        """Error of a temperature."""
        solution = self.state()
        return RELATIVE * solution.scale + 10 * got.error + 1e-12 * max(abs(one) for one in self.model.sinks)

    def kelvin(self, got: Found) -> tuple[float, float]:
        return got.value, self._kelvin(got)

    def _layer(self, n: int) -> int:
        if n > len(self.model.layers):
            raise RefusedError(NEEDED)
        return n

    def heat(self, name: str) -> Found:
        """Heat of the unit body, made or leaving."""
        return self.state().number(name)

    @cached_property
    def largest_heat(self) -> float:
        model, heats = self.model, [self.heat(name).value for name in ("left", "right", "side", "made")]
        heats += [model.area(0.0) * model.left.flux_in, model.area(model.thickness) * model.right.flux_in]
        heats += [self.heat(f"made {i}").value for i in range(1, len(model.layers) + 1)]
        heats += [skin.contact * model.section**2 * self._square() for skin in (model.left, model.right) if skin.contact]
        return max(abs(one) for one in heats)

    def _square(self) -> float:
        i = next((i for i, source in self.model.sources if source.electric), None)
        return 0.0 if i is None else self.state().number(f"square {i + 1}").value

    def heat_error(self, got: Found) -> float:
        model = self.model
        warm = max(abs(one) for one in model.sinks)
        k = max(layer.conductivity.at(self.now.zero) / layer.thickness for layer in model.layers)
        floor = 1e-12 * warm * k * model.area(model.thickness)
        return RELATIVE * self.largest_heat + floor + 10 * got.error

    def total(self, per_body: float, kind: str, area: float | None) -> float:
        """Heat of the unit body by the unit asked; `area` is that of the face, None for what is made."""
        shape = self.model.shape
        if kind == "flux":
            if area is None and shape != WALL:
                raise RefusedError(NEEDED)
            return per_body if area is None else per_body / area
        if kind == "line power":
            if shape != CYLINDER:
                raise RefusedError(NEEDED)
            return per_body
        needed = {WALL: "area", CYLINDER: "length"}.get(shape)
        if needed is None:
            return per_body
        if not self.cells.has(needed):
            raise RefusedError(NEEDED)
        return per_body * self.cells.number(needed)

    def _heat_out(self, name: str, kind: str) -> tuple[float, float]:
        model = self.model
        which = {"left heat out": "left", "right heat out": "right", "side heat out": "side", "heat made": "made"}[name]
        if (which == "left" and model.solid) or (which == "side" and model.shape != BAR):
            raise RefusedError(NEEDED)
        areas = {"left": model.area(0.0), "right": model.area(model.thickness), "made": None}
        if which == "side" and kind == "flux" and model.perimeter == 0.0:
            raise RefusedError(NEEDED)
        area = model.perimeter * model.thickness if which == "side" else areas[which]
        got = self.heat(which)
        return self.total(got.value, kind, area), abs(self.total(self.heat_error(got), kind, area))

    def _left_share(self) -> tuple[float, float]:
        outs = [max(self.heat(name).value, 0.0) for name in ("left", "right", "side")]
        total = sum(outs)
        if total <= NO_HEAT * self.largest_heat:
            raise RefusedError(IMPOSSIBLE)
        error = max(self.heat_error(self.heat(name)) for name in ("left", "right", "side")) / total
        return outs[0] / total, error if error < 1e-2 else math.inf

    def _balance(self) -> tuple[float, float]:
        outs = sum(self.heat(name).value for name in ("left", "right", "side"))
        largest = self.largest_heat
        value = 0.0 if largest == 0.0 else abs(self.heat("made").value - outs) / largest
        return value, RELATIVE + (self.heat_error(self.heat("made")) / largest if largest else 0.0)

    def _electrical(self, name: str) -> tuple[float, float]:
        """Voltage along the row's (first) current, or its resistance."""
        pair = next(((i, source) for i, source in self.model.sources if source.electric), None)
        if pair is None:
            raise RefusedError(NEEDED)
        i, source = pair
        cells, model, solution = self.cells, self.model, self.state()
        if not cells.has("length"):
            raise RefusedError(NEEDED)
        long, layer = cells.number("length"), model.layers[i]
        amplitude = math.sqrt(max(solution.number(f"square {i + 1}").value, 0.0))
        total = solution.number(f"total {i + 1}")
        if model.shape == BAR:
            resistance, current = total.value / model.section**2, amplitude * model.section
        else:
            across = "width" if model.shape == WALL else "length"
            wide = model.shape == WALL and (name == "resistance" or source.electric != SOLID_CURRENT)
            if wide and not cells.has("width"):
                raise RefusedError(NEEDED)
            width = cells.number(across, 1.0)
            if source.electric == SOLID_CURRENT:
                conducts = total.value * (width if model.shape == WALL else 1.0)
                resistance, current = long / conducts, amplitude * conducts
            else:
                if not layer.turns:
                    raise RefusedError(NEEDED)
                section = layer.thickness * width
                turn = total.value * (long if model.shape == WALL else 1.0) / layer.thickness
                resistance = layer.turns**2 * turn / (source.fill * section)
                current = amplitude * source.fill * section / layer.turns
        resistance *= source.ac
        value = resistance if name == "resistance" else math.copysign(1.0, source.given) * current * resistance
        relative = RELATIVE * (1.0 + 10 * self._rho_swing(source)) + 10 * total.error / abs(total.value)
        return value, abs(value) * relative

    def _rho_swing(self, source: Source) -> float:
        """How much the resistivity changes over the temperature scale, as a part."""
        if not source.law.varies:
            return 0.0
        low, high = self.state().lowest, self.state().peak[1].value
        ends = [source.law.at(one) for one in (low, high, *self.model.sinks)]
        return (max(ends) - min(ends)) / min(abs(one) for one in ends) if min(ends) > 0.0 else 1.0

    def beyond_tables(self) -> bool:
        """Whether a text table is used beyond its ends."""
        for i, layer in enumerate(self.model.layers, 1):
            low, high = self.state().kelvin(f"low {i}").value, self.state().kelvin(f"peak {i}").value
            laws = [layer.conductivity, *([] if layer.source is None else [layer.source.law])]
            if any(law.outside(low, high) for law in laws):
                return True
        return False

    def _verdict(self) -> str:
        if self.blank:
            raise RefusedError(NEEDED)
        if self.runaway:
            return RUNAWAY
        if any(self.margin(name).value < 0.0 for name in self.limits):
            return "over limit"
        if self.beyond_tables():
            return "caution"
        return "ok" if self.limits else "no limit"

    def answer(self, name: str, kind: str) -> tuple[float | str, float]:
        """One answer in SI (percent as a fraction) and its error; an infinite error where it is not defined."""
        model = self.model
        if name.startswith("allowable "):
            return self.allowable(name.removeprefix("allowable "))
        if name == "limited by":
            if not self.limits:
                raise RefusedError(NEEDED)
            return _exact(self.limited_by())
        if name == "verdict":
            return _exact(self._verdict())
        if self.blank:
            raise RefusedError(NEEDED)
        if name == "utilisation":
            return self.utilisation()
        if name == "headroom":
            if not self.limits:
                raise RefusedError(NEEDED)
            limiter = self.limited_by()
            got = self.margin(limiter if limiter in self.limits else self.nearest())
            return got.value, got.error
        state = self.state()
        word, _, rest = name.partition(" ")
        if name == "peak":
            return self.kelvin(state.peak[1])
        if name == "peak place":
            layer = state.peak[0]
            got = state.number(f"place {layer}")
            error = RELATIVE * (model.thickness + model.inner * 1e-6) + 10 * got.error
            return model.inner + got.value, math.inf if state.as_hot_elsewhere() else error
        if name == "peak layer":
            return float(state.peak[0]), 0.0
        if name in ("left face", "right face"):
            if name == "left face" and model.solid:
                raise RefusedError(NEEDED)
            return self.kelvin(state.watch(f"{word} limit"))
        if name == "mean":
            return self.kelvin(state.mean())
        if word in ("peak", "mean"):
            return self.kelvin(state.kelvin(f"{word} {self._layer(int(rest))}"))
        if word == "joint":
            n, side = rest.split()
            self._layer(int(n) + 1)
            return self.kelvin(state.kelvin(f"end {n}" if side == "left" else f"start {int(n) + 1}"))
        if name == "probe temperature":
            if self.probe is None:
                raise RefusedError(NEEDED)
            return self.kelvin(state.kelvin("probe"))
        if name in ("left heat out", "right heat out", "side heat out", "heat made"):
            return self._heat_out(name, kind)
        if name == "left share":
            return self._left_share()
        if name == "balance":
            return self._balance()
        if name in ("voltage", "resistance"):
            return self._electrical(name)
        raise RefusedError(NEEDED, exact=True)

    # --- what hangs on rounding ---

    def unsure(self, name: str) -> bool:
        """Whether a text answer, or a choice between limits, hangs on less than the errors."""
        if name == "peak layer":
            state = self.state()
            peaks = sorted(state.kelvin(f"peak {i}").value for i in range(1, len(self.model.layers) + 1))
            return len(peaks) > 1 and peaks[-1] - peaks[-2] <= 5e-6 * state.scale
        if name in ("limited by", "headroom") and len(self.limits) > 1:
            end = self.end(self.kind)
            if end.name in ("", BASE, RUNAWAY):
                margins = sorted(self.margin(one).value for one in self.limits)
                return margins[1] - margins[0] <= 5e-6 * self.state().scale
            others = {one: limit for one, limit in self.limits.items() if one != end.name}
            model = self._scaled_model(self.kind)
            group = frozenset(i for i, source in model.sources if source.kind == self.kind)
            try:
                other, scale, _ = Solution(model, rough=True).end(group, others)
            except (StuckError, RunawayError, NothingError):
                return True
            return other not in ("", BASE) and scale.value - end.scale <= 1e-3 * end.scale
        return False
