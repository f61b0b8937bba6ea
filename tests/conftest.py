"""One Calc for all tests that need it, started with the first and ended with the last."""

from __future__ import annotations

from collections.abc import Iterator

import calc_office
import pytest


@pytest.fixture(scope="session")
def calc(tmp_path_factory: pytest.TempPathFactory) -> Iterator[calc_office.Office]:
    """A headless Calc with Ingle in a profile of its own."""
    if calc_office.MISSING:
        pytest.skip(calc_office.MISSING)
    with calc_office.office(tmp_path_factory.mktemp("office")) as office:
        yield office
