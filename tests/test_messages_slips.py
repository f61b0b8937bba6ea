"""Slips that must end in an error or a sentence, never in a number without a sign or in a sentence about something else."""

from __future__ import annotations

import pytest
from ingle_addin.batch import solve_calls
from ingle_addin.cells import CellError
from test_messages import COOLED, HELD, LIMIT, TWO, Call, K, Q, heading, of_wall, points, profile, said, wall

SLOPE, Q2 = "conductivity slope [1/K]", "generation 2 [W/m³]"
COUNTED = "layers are counted from 1; write"
SENTENCES: list[tuple[Call, str]] = [
    (of_wall("peak 0 [°C]"), f"Heading 'peak 0 [°C]': {COUNTED} 'peak 1'"),
    (of_wall("mean 0 [°C]"), f"Heading 'mean 0 [°C]': {COUNTED} 'mean 1'"),
    (of_wall("joint 0 left [°C]", TWO), f"Heading 'joint 0 left [°C]': {COUNTED} 'joint 1 left'"),
    (of_wall("verdict 0"), "Heading 'verdict 0': 'verdict' takes no number; write 'verdict'"),
    (heading("shape 0"), "Heading 'shape 0': 'shape' takes no number; write 'shape'"),
    (heading("left limit 0 [°C]"), "Heading 'left limit 0 [°C]': 'left limit' takes no number; write 'left limit'"),
    (of_wall("utilisation [%]", {**TWO, LIMIT: 50.0, Q: 0.0, Q2: 0.0}), "The sources in this row are all 0, so they do not say how "
     "they scale together; give them"),
    (points(((10**400,),), ((1.0,),)), "Temperature 1 is beyond the range of numbers; correct it"),
    (profile(10**400), "The points are a number beyond 1e308; give a whole number from 2 to 10000"),
    (profile(float("inf")), "The points are inf; give a whole number from 2 to 10000"),
]  # fmt: skip


@pytest.mark.parametrize(("call", "sentence"), SENTENCES, ids=[sentence[:40] for _, sentence in SENTENCES])
def test_slip_is_told(call: Call, sentence: str) -> None:
    assert said(call) == sentence


# A body at 100 °C and somewhat above: within each table as it is read.
WARM = {**COOLED, HELD: 100.0, "both film [W/(m²·K)]": None, "both fluid [°C]": None}
UNSEEN: list[tuple[dict[str, object], CellError]] = [
    ({K: "0:10; 500:20", SLOPE: 0.01}, CellError.VALUE),  # a table and a slope are two answers to one question
    ({K: "-300:5; 500:6"}, CellError.NUM),  # nothing is colder than absolute zero
    ({K: "300 K:398; 400:393"}, CellError.VALUE),  # 400 of what, once one point is in kelvin
]


@pytest.mark.parametrize(("changes", "error"), UNSEEN, ids=[str(changes[K]) for changes, _ in UNSEEN])
def test_slip_in_a_text_table_is_an_error(changes: dict[str, object], error: CellError) -> None:
    name, arguments = wall({**WARM, **changes})
    (outcome,) = solve_calls("INGLE.PEAK", [arguments])  # type: ignore[list-item]
    assert name == "INGLE.WHY"
    assert outcome.grid[0][0] == error
    assert said((name, arguments)) != "ok"
