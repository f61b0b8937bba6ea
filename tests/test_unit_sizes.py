"""The table of common units against pint, which reads all others."""

from __future__ import annotations

import pytest
from ingle_addin import unit_sizes, units


def test_the_common_units_are_as_pint_has_them(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(units, "size_of", lambda _powers: None)
    for name in unit_sizes.SIZES:
        for power in (1, -1, 3):
            assert unit_sizes.size_of({name: power}) == units._size({name: power})
    mixed = {"kilowatt": 1, "centimeter": -2, "delta_degree_Fahrenheit": -1}
    assert unit_sizes.size_of(mixed) == units._size(mixed)
    assert unit_sizes.size_of({"watt": 1, "joule": -1, "second": 1}) == units._size({}) == (1, frozenset())
    assert unit_sizes.size_of({"mile": 1}) is None
