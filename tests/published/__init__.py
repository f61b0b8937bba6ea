"""Outside check values: figures of standards, validation manuals and papers, with their sources and tolerances.

`CHECKS` holds every one by its name; `tests/test_published.py` puts those within reach of today's physics to `ask` and
names what the others wait for.
"""

from published import conductivity, electric, faces, linear_source, thermal_explosion, uncertainty, uniform_source
from published.check import Check, Number

_TOPICS = (thermal_explosion, linear_source, uniform_source, conductivity, electric, faces, uncertainty)
CHECKS: dict[str, Check] = {check.id: check for topic in _TOPICS for check in topic.CHECKS}

__all__ = ["CHECKS", "Check", "Number"]
