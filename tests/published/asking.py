"""How a published case is asked."""

from __future__ import annotations

from typing import Any

from ingle_addin import ask


def answered(answers: str, case: dict[str, Any]) -> list[Any]:
    """Answers of one case, each as a number or text; a case without an answer fails with its reason."""
    *found, why = ask(f"{answers}; why", list(case), *case.values())
    assert why[0] == "ok", why[0]
    return [column[0] for column in found]
