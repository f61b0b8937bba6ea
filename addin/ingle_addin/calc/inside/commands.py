"""The commands of the menu."""

from __future__ import annotations

from typing import Any


def carry_out(context: Any, frame: Any, client: Any, settings: Any, url: str, args: Any) -> str:
    return "todo"
