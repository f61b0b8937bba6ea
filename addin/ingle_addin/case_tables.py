"""One small case table a shape, for the menus that insert one: headings, an example row to be replaced, answer formulas.

The example values are invented and of no product.
"""

from __future__ import annotations

from dataclasses import dataclass

from ingle_addin.cells import Cell
from ingle_addin.heading_reader import Column, read_input


@dataclass(frozen=True)
class CaseTable:
    """``inputs`` are headings and the example's values; ``answers`` are headings and formulas in which {headings}, {values}
    and {here} stand for the two ranges and the cell of the answer's own heading, arguments parted by ;."""

    shape: str
    title: str
    inputs: tuple[tuple[str, Cell], ...]
    answers: tuple[tuple[str, str], ...]

    @property
    def headings(self) -> tuple[str, ...]:
        """The input headings."""
        return tuple(heading for heading, _ in self.inputs)

    @property
    def values(self) -> tuple[Cell, ...]:
        """The example row."""
        return tuple(value for _, value in self.inputs)

    @property
    def available(self) -> bool:
        """Whether the physics behind every heading is there."""
        columns = [read_input(heading, place) for place, heading in enumerate(self.headings)]
        return all(isinstance(column, Column) and column.available for column in columns)


def _answers(*faces: str, source: str) -> tuple[tuple[str, str], ...]:
    asked = "INGLE.ASK({here};{headings};{values})"
    return (
        ("peak [°C]", "INGLE.PEAK({headings};{values})"),
        *((f"{face} face [°C]", f'INGLE.FACE("{face}";{{headings}};{{values}})') for face in faces),
        ("headroom [K]", asked),
        (f"allowable {source}", "INGLE.ALLOW({headings};{values})"),
        ("verdict", asked),
        ("why", "INGLE.WHY({headings};{values})"),
    )


CASE_TABLES: tuple[CaseTable, ...] = (
    CaseTable("wall", "Wall", (
        ("shape", "wall"),
        ("thickness [mm]", 40.0),
        ("conductivity [W/(m·K)]", 0.3),
        ("generation [kW/m³]", 5.0),
        ("left film [W/(m²·K)]", 10.0),
        ("left fluid [°C]", 25.0),
        ("right film [W/(m²·K)]", 5.0),
        ("right fluid [°C]", 30.0),
        ("limit [°C]", 90.0),
    ), _answers("left", "right", source="generation [kW/m³]")),
    CaseTable("cylinder", "Cylinder, solid or hollow", (
        ("shape", "cylinder"),
        ("inner diameter [mm]", 40.0),
        ("outer diameter [mm]", 80.0),
        ("conductivity [W/(m·K)]", 0.8),
        ("generation [kW/m³]", 60.0),
        ("inner film [W/(m²·K)]", 5.0),
        ("inner fluid [°C]", 40.0),
        ("outer film [W/(m²·K)]", 20.0),
        ("outer fluid [°C]", 30.0),
        ("limit [°C]", 130.0),
    ), _answers("inner", "outer", source="generation [kW/m³]")),
    CaseTable("sphere", "Sphere, solid or hollow", (
        ("shape", "sphere"),
        ("inner diameter [mm]", None),
        ("outer diameter [mm]", 60.0),
        ("conductivity [W/(m·K)]", 0.5),
        ("generation [kW/m³]", 20.0),
        ("outer film [W/(m²·K)]", 8.0),
        ("outer fluid [°C]", 25.0),
        ("limit [°C]", 95.0),
    ), _answers("outer", source="generation [kW/m³]")),
    CaseTable("bar", "Bar between terminals", (
        ("shape", "bar"),
        ("length [mm]", 600.0),
        ("width [mm]", 40.0),
        ("thickness [mm]", 5.0),
        ("conductivity [W/(m·K)]", 390.0),
        ("resistivity [nΩ·m]", 17.2),
        ("resistivity slope [1/K]", 0.0039),
        ("current [A]", 900.0),
        ("side film [W/(m²·K)]", 10.0),
        ("side fluid [°C]", 35.0),
        ("left held [°C]", 50.0),
        ("right held [°C]", 55.0),
        ("limit [°C]", 105.0),
    ), _answers("left", "right", source="current [A]")),
)  # fmt: skip


def available() -> tuple[CaseTable, ...]:
    """The tables whose every heading can be answered."""
    return tuple(table for table in CASE_TABLES if table.available)
