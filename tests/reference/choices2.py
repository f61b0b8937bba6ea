"""What the reference takes in its wider scope, and the sentence of the design that led there."""

from __future__ import annotations

WIDER: tuple[tuple[str, str], ...] = (
    (
        "A row has as many layers as its highest layer number filled in (`joint n` and one more; `limit n` counts). "
        "Each needs a size and a conductivity, else #N/A; so do a layer that is skipped and a joint with nothing beyond.",
        "`#N/A` a needed input is blank; A number ending a name is a layer",
    ),
    (
        "In a row with a layer 2 an unnumbered `outer radius`, `outer diameter`, and any `radius` or `diameter`, is #VALUE!.",
        "in a row with a layer 2 the number is compulsory. `radius`, `diameter` for solid one-layer bodies",
    ),
    ("An outside that is not beyond the layer within is #NUM!.", "`#NUM!` an impossible value"),
    (
        "Layers without a source heading filled have no source; the row needs one somewhere (0 will do), or exactly one "
        "source column, left blank, of a layer that the row has: then only allowables and `limited by` are answered.",
        "One source a layer. A row with no source at all is `#N/A`; blank or 0 may stand in the only source column",
    ),
    (
        "Joint and face resistances may be 0 (layers touch; a face right at its sink); a conductance of 0 is #NUM!.",
        "a conductance if the unit is W/(m²·K)",
    ),
    (
        "`peak n`, `mean n`, `joint n …` of layers that the row does not have are #N/A. At a joint without resistance "
        "both sides are the same temperature.",
        "`joint 1 left`, `joint 1 right` each side of a joint",
    ),
    (
        "`peak`, `mean` are of the whole body in layered rows, `peak 1`, `mean 1` of layer 1; so with `limit` and `limit 1`.",
        "A bare name is layer 1, except `limit` … and the answers `peak` and `mean` (whole body)",
    ),
    (
        "A slope beside a text table is #VALUE!; a reference without a slope, or beside a table, changes nothing.",
        "k = k₀[1 + slope (T − reference)]; reference 20 °C if blank; or a text table",
    ),
    (
        "A text table that cannot be read, does not rise, or has a unit on some temperatures only is #VALUE!; a "
        "conductivity or resistivity in it that is not positive, or a temperature below absolute zero, is #NUM!. One "
        "point alone is a constant; a `;` at the end is let pass.",
        "`20:16.2; 500:21.5`: °C, or with a unit inside, rising",
    ),
    (
        "`verdict`: runaway, then over limit, then caution (a text table used beyond its ends at the present state, in "
        "its own layer), then no limit or ok. Other causes of a caution are not known here.",
        "held beyond the ends with a caution",
    ),
    (
        "A conductivity that falls to 0 on the way from cold ends the branch like a runaway; a conductivity or "
        "resistivity that is not positive with no source on is #NUM! for the whole row.",
        "`#NUM!` an impossible value, or no steady state (runaway)",
    ),
    (
        "No steady state: everything at the present source is #NUM!, `verdict` is `runaway`; allowables, `utilisation` "
        "and `limited by` are still answered (`headroom` is not).",
        "no steady state (runaway); source at which the first limit is reached … Never beyond runaway",
    ),
    (
        "The state is followed from no source with all sources growing together as heat. Where the branch turns back "
        "the row has run away, even if a hotter steady state lies beyond (a text table can make one).",
        "the state reached from cold no longer exists",
    ),
    (
        "Allowables follow sources of one kind from nothing with the others as they are. Runaway before any limit: the "
        "allowable is the source at runaway, `limited by` is `runaway`, `headroom` that of the limit with least kelvin "
        "left. Without any limit filled they are #N/A even if there is a runaway.",
        "Never beyond runaway; sources of that kind scale together, everything else stays",
    ),
    (
        "Several sources of a kind: the allowable tells that of the lowest layer whose value is a number other than 0. "
        "All 0 in more than one layer: #N/A. A row whose only source of the kind is a text table: `allowable …` is #N/A, "
        "`utilisation` the part of the table's scale.",
        "sources of that kind scale together",
    ),
    (
        "Kinds mixed in one row: `utilisation`, `limited by`, `headroom` are of the kind of the lowest layer's source.",
        "% of the allowable now used; which limit",
    ),
    (
        "`utilisation` of a current, voltage or current density is of that quantity, not of its heat.",
        "% of the allowable now used",
    ),
    (
        "`generation slope` goes with `generation` and `specific generation`; beside another source, or none, in its "
        "layer it is #VALUE!.",
        "q = q₀[1 + slope (T − reference)]; a plausible slip must end in an error",
    ),
    (
        "`emissivity` needs `surroundings` or a fluid with a film, `surroundings` need `emissivity`, and a fluid "
        "with emissivity but no film is #N/A (the film is missing). `held` beside emissivity, surroundings is #VALUE!. "
        "Emissivity outside 0 to 1 is #NUM!.",
        "blank surroundings are at the fluid's temperature; `#N/A` a needed input is blank",
    ),
    (
        "A fluid with a resistance alone is a sink behind that resistance; with flux in or emissivity besides and no "
        "film it is #N/A. A resistance without fluid, held temperature or emissivity is #N/A.",
        "with a fluid and nothing else it alone is the path",
    ),
    (
        "`left face` and `left limit` are of the body's face, inside its resistance; resistances are per area of it.",
        "between the body's face and its outermost surface or held temperature; at that face of the body",
    ),
    (
        "A current's properties (resistivity, its slope and reference, ac ratio, turns, fill factor, a bar's contact) with "
        "no current, voltage or current density in the layer are #VALUE!; a current without resistivity is #N/A.",
        "With no current in its layer: `#VALUE!`",
    ),
    (
        "Currents are of walls, cylinders and bars; on a sphere #VALUE!. A wall's current needs `width` (a winding's "
        "section too), a winding on a cylinder `length`; any voltage `length`.",
        "along the numbered layer of a wall (over thickness × `width`) or cylinder (along its axis), or along a bar",
    ),
    (
        "`current density` in a solid conductor is the mean over its section, current over section; in a winding, that of "
        "the conductor itself, without need of turns. `turns` or `fill factor` make a winding.",
        "in the conductor; the field along the axis is uniform, not the current density",
    ),
    (
        "A winding's voltage and resistance are of all turns in series: each 2πr long around a cylinder, `length` long in a "
        "wall. It is the AC resistance, `ac ratio` included, and `voltage` is current times this, so heat = V · I everywhere.",
        "ac ratio: AC to DC resistance ratio; voltage, resistance: along `length`, of the row's current",
    ),
    (
        "A voltage given is that over the AC resistance, so E = voltage / (ac ratio · length) in the formula of the heat.",
        "ac ratio: AC to DC resistance ratio; q = ac ratio · E²/ρ(T)",
    ),
    (
        "The sign of a current, voltage or current density does not matter but for the sign of `voltage` and `utilisation`. "
        "An ac ratio below 1, a fill factor above 1 are #NUM!.",
        "AC to DC resistance ratio; share of that section that is conductor",
    ),
    (
        "Several currents in a row: `voltage` and `resistance` are of the lowest layer's.",
        "of the row's current",
    ),
    (
        "A bar's section is one of `section` (with `perimeter` if its sides lose heat, else #N/A), `width` with `thickness`, "
        "`diameter`; two ways filled are #VALUE!. It has one layer; a second is out of scope. `area`, bores, radii, turns are "
        "#VALUE! on a bar; side losses, sections and contacts on other shapes are too.",
        "of a bar; or `width` with `thickness`; or `diameter`",
    ),
    (
        "The heat of a bar's contact enters at the bar's own end, inside an end resistance; it is taken in like a flux "
        "in: not in `heat made`, and `left heat out` is net of it. Contacts are not in `voltage`, `resistance`, nor in what "
        "a voltage drives a current through.",
        "its I²R enters at that end; with a voltage, I follows from its own resistance",
    ),
    (
        "Of a bar W/m² is per section at its ends, per surface at its sides (#N/A without a perimeter), W is of the whole "
        "bar, W/m is #N/A, as is `heat made` in W/m². `side heat out` is #N/A for other shapes. `left share` counts the side "
        "among all heat leaving.",
        "by the unit asked: W/m² (of that face), W/m, W; % of all heat leaving that leaves on the left",
    ),
)
