"""The reference checked against closed forms: textbook conduction, conservation, and exact two-constant solutions."""

from __future__ import annotations

import math
from collections.abc import Callable

import mpmath as mp
import pytest
import reference
from reference import headings as ref_headings
from reference import units
from reference.finite_volume import Body, Face
from reference.rows import RefusedError, Row, read, understand

Q, K, SIZE, HOT = 3.0e5, 15.0, 0.04, 293.15
TABLES = reference.draw.tables(7, 400)


def ask(answers: list[str], text: str, *cells: object) -> list[object]:
    return reference.answers(answers, text.split(";"), [list(cells)])[0]


def one(answer: str, text: str, *cells: object) -> object:
    return ask([answer], text, *cells)[0]


# --- textbook results: a uniform source in a slab, a solid cylinder and a solid sphere, face at a fixed temperature ---

HELD = "shape;conductivity [W/(m·K)];generation [W/m³];both held [°C];"


@pytest.mark.parametrize(
    ("shape", "size", "rise", "ratio"),
    [
        ("wall", "thickness [mm]", Q * 0.02**2 / (2 * K), 2 / 3),  # q a²/2k, a half the thickness; mean 2/3 of it
        ("cylinder", "radius [mm]", Q * SIZE**2 / (4 * K), 1 / 2),  # q R²/4k, 1/2
        ("sphere", "radius [mm]", Q * SIZE**2 / (6 * K), 2 / 5),  # q R²/6k, 2/5
    ],
)
def test_textbook_peak_and_mean(shape: str, size: str, rise: float, ratio: float) -> None:
    peak, mean, right, place = ask(
        ["peak [°C]", "mean [°C]", "right face [°C]", "peak place [mm]"], HELD + size, shape, K, Q, 20.0, 40.0
    )
    assert peak - 20.0 == pytest.approx(rise, rel=1e-9)
    assert mean - 20.0 == pytest.approx(rise * ratio, rel=1e-8)
    assert right == pytest.approx(20.0, abs=1e-12)
    assert place == pytest.approx(20.0 if shape == "wall" else 0.0, abs=1e-9)


def test_wall_with_a_film_on_one_side_and_nothing_on_the_other() -> None:
    """All heat leaves by the film: face = fluid + q L/h; the insulated face is hotter by q L²/2k."""
    text = "shape;thickness [cm];conductivity [W/mK];generation [kW/m3];right film [W/m²K];right fluid [°C];limit [°C]"
    names = ["left face [°C]", "right face [°C]", "right heat out [W/m²]", "left share [%]", "headroom [K]", "verdict"]
    left, right, out, share, room, verdict = ask(names, text, "wall", 4.0, K, 300.0, 400.0, 20.0, 80.0)
    assert right == pytest.approx(20.0 + Q * SIZE / 400.0, rel=1e-12)
    assert left - right == pytest.approx(Q * SIZE**2 / (2 * K), rel=1e-9)
    assert out == pytest.approx(Q * SIZE, rel=1e-12)
    assert (share, verdict) == (0.0, "ok")
    assert room == pytest.approx(80.0 - left, rel=1e-9)


def test_plain_resistances_without_a_source() -> None:
    """Hollow cylinder and sphere between two held faces: 2πkΔT/ln(b/a) and 4πkΔT ab/(b − a)."""
    text = "shape;inner radius [m];outer radius [m];conductivity [W/m/K];generation [W/m3];inner held [K];outer held [K]"
    a, b = 0.002, 1.3
    per_metre = one("right heat out [W/m]", text, "cylinder", a, b, K, 0.0, 400.0, 300.0)
    assert per_metre == pytest.approx(2 * math.pi * K * 100.0 / math.log(b / a), rel=1e-10)
    whole = one("left heat out [W]", text, "sphere", a, b, K, 0.0, 400.0, 300.0)
    assert whole == pytest.approx(-4 * math.pi * K * 100.0 * a * b / (b - a), rel=1e-10)


def test_every_source_kind_is_the_same_heat() -> None:
    body = "shape;radius [m];length [m];density [kg/m³];conductivity [W/(m·K)];outer film [W/(m²·K)];outer fluid [K];"
    volume = math.pi * SIZE**2
    peaks = [
        one("peak [K]", body + source, "cylinder", SIZE, 2.0, 8000.0, K, 50.0, HOT, value)
        for source, value in (
            ("generation [W/m³]", Q),
            ("specific generation [W/kg]", Q / 8000.0),
            ("power [kW]", Q * volume * 2.0 / 1000.0),
            ("line power 1 [W/cm]", Q * volume / 100.0),
        )
    ]
    assert peaks == pytest.approx([HOT + Q * SIZE / 2 / 50.0 + Q * SIZE**2 / (4 * K)] * 4, rel=1e-10)


def test_allowable_is_linear_in_the_room_and_blind_to_a_blank_source() -> None:
    text = "shape;radius [m];conductivity [W/mK];both held [°C];limit [°C];generation [MW/m³]"
    names = ["allowable generation [W/m³]", "utilisation [%]", "limited by", "peak [°C]", "allowable power [W]"]
    exact = 100.0 * 6 * K / SIZE**2
    full = ask(names, text, "sphere", SIZE, K, 20.0, 120.0, 0.1)
    assert full[0] == pytest.approx(exact, rel=1e-9)
    assert full[1] == pytest.approx(1e5 / exact * 100.0, rel=1e-9)
    assert full[2:3] + full[4:] == ["limit", "#N/A"]
    blank = ask(names, text, "sphere", SIZE, K, 20.0, 120.0, None)
    assert blank[0] == pytest.approx(exact, rel=1e-9)
    assert blank[1:] == ["#N/A", "limit", "#N/A", "#N/A"]
    assert one("allowable generation [W/m³]", text, "sphere", SIZE, K, 20.0, 15.0, 0.1) == "#NUM!"


# --- exact solutions of random rows: T = −q r²/(2 n k) + A φ(r) + B with φ = x, ln r, −1/r, in 60 digits ---


class Exact:
    """The general solution of steady conduction with a uniform source, its two constants set by the faces."""

    def __init__(self, body: Body, source: float) -> None:
        self.n, self.k, self.q = body.shape + 1, mp.mpf(body.conductivity), mp.mpf(source)
        self.a = mp.mpf(body.inner)
        self.b = self.a + mp.mpf(body.thickness)
        self.solid = body.solid
        rows = [self._face(body.left, self.a, 1), self._face(body.right, self.b, -1)]
        if self.solid:
            rows[0] = (mp.mpf(1), mp.mpf(0), mp.mpf(0))
        (p, r, s), (t, u, v) = rows
        det = p * u - r * t
        self.c1, self.c2 = (s * u - r * v) / det, (p * v - s * t) / det

    def phi(self, r: mp.mpf) -> mp.mpf:
        if self.solid:
            return mp.mpf(0)
        return (r, mp.log(r) if self.n == 2 else 0, -1 / r if self.n == 3 else 0)[self.n - 1]

    def slope(self, r: mp.mpf) -> mp.mpf:
        return mp.mpf(0) if self.solid else r ** (1 - self.n)

    def _face(self, face: Face, r: mp.mpf, inward: int) -> tuple[mp.mpf, mp.mpf, mp.mpf]:
        """Coefficients of A and B, and the right-hand side. Conduction inward at the face = film and flux in."""
        own, own_slope = -self.q * r**2 / (2 * self.n * self.k), -self.q * r / (self.n * self.k)
        if face.held is not None:
            return self.phi(r), mp.mpf(1), mp.mpf(face.held) - own
        film = mp.mpf(face.film)
        # heat into the body through the face: −k dT/d(inward) = film (fluid − T) + flux in
        a1 = -self.k * inward * self.slope(r) + film * self.phi(r)
        rhs = film * (mp.mpf(face.fluid) - own) + mp.mpf(face.flux_in) + self.k * inward * own_slope
        return a1, film, rhs

    def at(self, r: mp.mpf) -> mp.mpf:
        return -self.q * r**2 / (2 * self.n * self.k) + self.c1 * self.phi(r) + self.c2

    def out(self, r: mp.mpf) -> mp.mpf:
        """Heat flux toward the right."""
        return self.q * r / self.n - self.k * self.c1 * self.slope(r)

    def peak(self) -> tuple[mp.mpf, mp.mpf]:
        places = [self.a, self.b]
        if self.q > 0 and not self.solid and self.c1 > 0:
            places.append((self.n * self.k * self.c1 / self.q) ** (mp.mpf(1) / self.n))
        return max((self.at(r), r) for r in places if self.a <= r <= self.b)

    def mean(self) -> mp.mpf:
        a, b, n = self.a, self.b, self.n
        volume = (b**n - a**n) / n
        square = (b ** (n + 2) - a ** (n + 2)) / (n + 2)
        shape = mp.mpf(0)
        if not self.solid:
            shape = {
                1: lambda: (b**2 - a**2) / 2,
                2: lambda: (b**2 * (mp.log(b) / 2 - mp.mpf(1) / 4)) - (a**2 * (mp.log(a) / 2 - mp.mpf(1) / 4)),
                3: lambda: -(b**2 - a**2) / 2,
            }[n]()
        return (-self.q / (2 * n * self.k) * square + self.c1 * shape) / volume + self.c2


def legal_rows() -> list[Row]:
    out = []
    for texts, rows in TABLES:
        columns = [ref_headings.column(text) for text in texts]
        for cells in rows:
            try:
                out.append(understand(read(columns, cells), columns))
            except RefusedError:
                continue
    return [row for row in out if row.source is not None]


ROWS = legal_rows()


def worst(error: Callable[[Row, Exact], mp.mpf]) -> float:
    with mp.workdps(60):
        return float(max(error(row, Exact(row.body, row.source or 0.0)) for row in ROWS))


def test_there_are_many_legal_rows_of_every_shape() -> None:
    assert len(ROWS) > 280
    assert {row.body.shape for row in ROWS} == {0, 1, 2}


def _relative(ours: float, exact: mp.mpf, row: Row) -> mp.mpf:
    scale = row.solved.scale(row.source or 0.0)
    return abs(ours - exact) / (scale + 1e-6)


TEMPERATURES: dict[str, Callable[[Row, Exact], tuple[float, mp.mpf]]] = {
    "peak": lambda row, exact: (row.solved.peak(row.source), exact.peak()[0]),
    "left": lambda row, exact: (row.solved.left(row.source), exact.at(exact.a)),
    "right": lambda row, exact: (row.solved.right(row.source), exact.at(exact.b)),
    "mean": lambda row, exact: (row.solved.mean(row.source), exact.mean()),
    "third": lambda row, exact: (
        row.solved.at(row.body.thickness / 3, row.source),
        exact.at(exact.a + mp.mpf(row.body.thickness / 3)),
    ),
}


@pytest.mark.parametrize("name", TEMPERATURES)
def test_temperatures_against_exact_solutions(name: str) -> None:
    assert worst(lambda row, exact: _relative(*TEMPERATURES[name](row, exact), row)) < 2e-7


def test_heats_against_exact_solutions() -> None:
    def error(row: Row, exact: Exact) -> mp.mpf:
        q, solved, body = row.source, row.solved, row.body
        left, right = body.area(0.0) * exact.out(exact.a), body.area(body.thickness) * exact.out(exact.b)
        largest = row.largest_heat(q)
        noise = 1e-12 * HOT * body.conductivity * body.area(body.thickness) / body.thickness
        return max(abs(solved.left_out(q) + left), abs(solved.right_out(q) - right)) / (largest + noise)

    assert worst(error) < 1e-7


def test_the_peaks_place_against_exact_solutions() -> None:
    def error(row: Row, exact: Exact) -> mp.mpf:
        peak, place = exact.peak()
        if peak - min(exact.at(exact.a), exact.at(exact.b)) <= 1e-9 * row.solved.scale(row.source):
            return mp.mpf(0)
        if abs(exact.at(exact.a) - exact.at(exact.b)) < 1e-6 * row.solved.scale(row.source) and row.source <= 0:
            return mp.mpf(0)
        return abs(row.solved.peak_place(row.source) - (place - exact.a)) / row.body.thickness

    assert worst(error) < 5e-7


def test_allowables_put_the_first_limit_exactly_on_its_temperature() -> None:
    checked = 0
    for row in ROWS:
        if not row.limits or row.first[1] is None or row.first[1] < 0:
            continue
        name, source = row.first
        with mp.workdps(60):
            exact = Exact(row.body, source)
            places = {"left limit": exact.at(exact.a), "right limit": exact.at(exact.b)}
            now = {one: places[one] if one in places else exact.peak()[0] for one in row.limits}
        scale = row.solved.scale(source, *row.limits.values())
        assert abs(now[name] - row.limits[name]) < 1e-6 * scale
        assert all(now[one] < limit + 1e-6 * scale for one, limit in row.limits.items())
        checked += 1
    assert checked > 100


def test_heat_balances() -> None:
    for texts, rows in TABLES[:6]:
        for (balance,) in reference.answers("balance [%]", texts, rows):
            assert isinstance(balance, str) or balance < 1e-4


# --- headings, cells, errors ---

PLAIN = "shape;thickness [mm];conductivity [W/(m·K)];generation [W/m³];right film [W/(m²·K)];right fluid [°C]"
CELLS = ["wall", 40.0, K, Q, 400.0, 20.0]


@pytest.mark.parametrize(
    ("place", "cell", "error"),
    [
        *[(i, None, "#N/A") for i in range(6)],
        *[(i, "5", "#VALUE!") for i in range(6)],
        *[(i, True, "#VALUE!") for i in range(6)],
        *[(i, "#DIV/0!", "#DIV/0!") for i in range(6)],
        *[(i, -300.0, "#NUM!") for i in (1, 2, 4, 5)],
        (3, -1e9, "#NUM!"),
        (0, "bar", "#N/A"),
    ],
)
def test_one_bad_cell(place: int, cell: object, error: str) -> None:
    assert one("peak [°C]", PLAIN, *CELLS[:place], cell, *CELLS[place + 1 :]) == error


@pytest.mark.parametrize(
    ("heading", "cell", "error"),
    [
        ("both fluid [K]", 300.0, "#VALUE!"),
        ("outer held [°C]", 20.0, "#VALUE!"),
        ("outer held [°C]", None, None),
        ("power [W]", 0.0, "#VALUE!"),
        ("area [m²]", -1.0, "#NUM!"),
        ("left film [W/m²K]", 5.0, "#N/A"),
        ("probe [mm]", 41.0, "#NUM!"),
        ("inner diameter [mm]", 41.0, "#VALUE!"),
        ("thickness 2 [mm]", 3.0, "#N/A"),
        ("thickness 2 [mm]", None, None),
        ("material", "copper", "#N/A"),
        ("thickness", None, "#VALUE!"),
        ("length [kg]", None, "#VALUE!"),
        ("peak [°C]", None, "#VALUE!"),
        ("thicknes [mm]", None, "#VALUE!"),
        ("# anything", "#DIV/0!", None),
        ("Notes of mine", "#DIV/0!", None),
        (" ", "#DIV/0!", None),
    ],
)
def test_one_more_heading(heading: str, cell: object, error: str | None) -> None:
    got = ask(["peak [°C]", "verdict"], f"{PLAIN};{heading}", *CELLS, cell)
    fine = ask(["peak [°C]", "verdict"], PLAIN, *CELLS)
    assert got == (fine if error is None else [error, got[1]])
    assert error is None or got[1] in (error, "no answer")


def test_solid_bodies_have_no_left_face_and_blank_rows_no_answer() -> None:
    names = ["left face [°C]", "left heat out [W]", "right face [°C]", "left share [%]", "limited by", "verdict"]
    text = HELD + "radius [mm]"
    assert ask(names, text, "Sphere", K, Q, 20.0, 40.0) == ["#N/A", "#N/A", 20.0, 0.0, "#N/A", "no limit"]
    assert ask(names, text + ";inner limit [°C]", "Sphere", K, Q, 20.0, 40.0, 90.0)[0] == "#VALUE!"
    assert ask(names, text, None, "", " ", "\u00a0", None) == [""] * 6


def test_nothing_cooled_and_later_things() -> None:
    assert one("peak [°C]", "shape;thickness [m];conductivity [W/mK];generation [W/m3]", "wall", 1.0, 1.0, 0.0) == "#NUM!"
    assert ask(["runaway margin [K]", "settling time [s]", "peek [°C]", "peak [m]"], PLAIN, *CELLS) == [
        *("#N/A", "#N/A", "#VALUE!", "#VALUE!")
    ]


def test_temperature_units_and_differences() -> None:
    text = PLAIN + ";limit [°F]"
    names = ["peak [°C]", "peak [K]", "peak [°F]", "headroom [K]", "headroom [°F]", "headroom [°C]"]
    c, k, f, room, room_f, room_c = ask(names, text, *CELLS, 212.0)
    assert (k, f, room) == pytest.approx((c + 273.15, c * 1.8 + 32.0, 100.0 - c), rel=1e-12)
    assert (room_f, room_c) == pytest.approx((room * 1.8, room), rel=1e-12)


def test_units_by_hand() -> None:
    def factor(spelling: str, kind: str) -> float:
        found = units.find(spelling, (kind,))
        assert found is not None
        return found[1][0]

    assert factor("BTU/hr-ft-F", "conductivity") == pytest.approx(1.730735, rel=1e-6)
    assert factor("BTU/(hr·ft²·°F)", "film") == pytest.approx(5.678263, rel=1e-6)
    assert factor("W/in²", "flux") == pytest.approx(1550.0031, rel=1e-7)
    assert factor("lb/ft³", "density") == pytest.approx(16.018463, rel=1e-6)
    assert factor("mW/mm²", "flux") == pytest.approx(1000.0, rel=1e-12)
    assert units.find("w/m²", ("flux",)) is None


# --- the random tables ---


def test_tables_repeat_and_most_rows_are_legal() -> None:
    assert reference.draw.tables(7, 400) == TABLES
    assert reference.draw.tables(8, 100) != reference.draw.tables(7, 100)
    got = [row[0] for texts, rows in TABLES for row in reference.answers("peak [°C]", texts, rows)]
    assert len(got) == 400
    errors = sum(isinstance(value, str) and value.startswith("#") for value in got)
    assert 0.08 * len(got) < errors < 0.25 * len(got)
    assert got.count("") < 0.06 * len(got)


def test_answers_and_tolerances_of_random_tables_are_whole() -> None:
    asked = reference.draw.ANSWERS
    for texts, rows in TABLES[:4]:
        found = reference.answers(asked, texts, rows)
        assert [len(row) for row in found] == [len(asked)] * len(rows)
        bounds = reference.rounding.tolerances(asked, texts, rows)
        for values, errors in zip(found, bounds, strict=True):
            for value, error in zip(values, errors, strict=True):
                assert error >= 0.0
                assert isinstance(value, str) or math.isfinite(value)
    assert all(why and choice for choice, why in reference.CHOICES)
