"""What stops a command."""

from __future__ import annotations


class Failure(Exception):  # noqa: N818 - a message for people, shown without its type
    """One line that says what could not be done and what to do; the command leaves with 2."""
