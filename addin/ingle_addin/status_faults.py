"""What a row is told whose case the solver could not answer."""

from __future__ import annotations

from ingle import Status

from ingle_addin.cells import CellError
from ingle_addin.faults import ROW, Fault

# Allowable sources are answered though the row's own source is too much for any steady state.
BEYOND = frozenset({Status.RUNAWAY, Status.TOO_HOT, Status.NO_CONDUCTIVITY})

STATUS_FAULTS = {
    Status.NO_OUTLET: Fault(
        CellError.NUM, f"no heat can leave the body in {ROW}, so it has no steady state; give a face a film above 0 with its "
        "fluid, or hold it at a temperature"),
    Status.BELOW_ABSOLUTE_ZERO: Fault(
        CellError.NUM, f"the answer in {ROW} would lie below absolute zero; check the signs of the generation and the fluxes"),
    Status.NO_CONDUCTIVITY: Fault(
        CellError.NUM,
        f"a conductivity or resistivity in {ROW} falls to zero on the way to its temperature; check the slope or give a table",
        verdict="runaway",
    ),
    Status.NOT_BALANCED: Fault(
        CellError.NUM, f"no temperature was found at which the heats of {ROW} balance; check that its values belong together"
    ),
    Status.RUNAWAY: Fault(
        CellError.NUM, f"the source in {ROW} runs away: it grows with temperature faster than the body can shed it, so there is no "
        "steady state; lower the source or cool the body more", verdict="runaway"),
    Status.TOO_HOT: Fault(
        CellError.NUM, f"the body in {ROW} would pass 10,000 °C, where nothing stays solid; check the source, its unit and the "
        "cooling", verdict="runaway"),
    Status.UNRESOLVED: Fault(
        CellError.NUM, f"the temperature in {ROW} changes within too small a part of a layer to be resolved; shorten the body or "
        "check its sizes and slopes"),
    Status.OVERFLOW: Fault(
        CellError.NUM, f"the values in {ROW} are so far apart that the answer is beyond the range of numbers; check their units"),
}  # fmt: skip
