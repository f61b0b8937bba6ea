"""What a check of the set-up finds, one line each, with what to do where something is wrong."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Finding:
    """``said`` is what was found; ``remedy`` is what to do, empty where nothing is wrong."""

    what: str
    said: str
    remedy: str = ""

    @property
    def good(self) -> bool:
        """Whether nothing is wrong."""
        return not self.remedy
