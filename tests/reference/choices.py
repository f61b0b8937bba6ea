"""Where the design leaves a choice: what the reference takes, and the sentence that led there."""

from __future__ import annotations

from .choices2 import WIDER

CHOICES: tuple[tuple[str, str], ...] = (
    (
        "Several things wrong in one row: an error cell first, then a bad heading, a heading out of scope, #VALUE!, "
        "#N/A, last #NUM!. A wholly blank row is empty text even then.",
        "`#N/A` a needed input is blank · `#VALUE!` text where a number belongs … · `#NUM!` an impossible value",
    ),
    (
        "A row whose only filled cells stand under blank, `#` or `note` headings is wholly blank; an error cell there "
        "does not matter.",
        "A blank heading skips its column; one that begins with `#` or `note` is the user's own and is skipped",
    ),
    (
        "A heading that cannot be read makes every row #VALUE!, used or not; an answer heading that cannot be read "
        "makes only that answer #VALUE!.",
        "any other unknown name is an error",
    ),
    (
        "`verdict` is `no answer` for every row that cannot be answered (also with the only source column blank), "
        "but an error cell's own error, and #N/A for a row out of the reference's scope.",
        "`verdict`: `ok`, `caution`, `over limit`, `no limit`, `runaway`, `no answer`",
    ),
    ("TRUE and FALSE in a number's cell are #VALUE!.", "`#VALUE!` text where a number belongs"),
    (
        "An input filled in that the row's shape has no use for is #VALUE!: a bore, radius, diameter or outside of a "
        "wall; `width` or `area` of a round body; `length` of a sphere. Only a wall's `length` and `width` are let "
        "pass unused.",
        "a plausible slip must end in an error or a caution, never in a wrong number without a sign",
    ),
    (
        "`thickness`, `outer radius`, `outer diameter`, `radius`, `diameter` are one input, so are `inner radius` and "
        "`inner diameter`; two of them filled are #VALUE!. `radius` or `diameter` beside a bore is #VALUE!.",
        "`outer radius`, `outer diameter`: instead of its thickness; `radius`, `diameter` for solid one-layer bodies",
    ),
    ("A round body with a thickness and no bore is solid, its radius the thickness.", "blank is solid"),
    ("A bore of exactly 0 is a solid body; a negative one is #NUM!.", "inner radius: bore of a round body; blank is solid"),
    (
        "On a solid round body `left …` inputs, also `left limit`, are #VALUE!; `both …` means the outer face; "
        "`left face` and `left heat out` are #N/A (the bore is blank), `left share` is 0 % when heat leaves.",
        "the middle of a solid round body is none and takes none",
    ),
    (
        "A film without a fluid and a fluid without a film are #N/A; `held` beside film, fluid or flux in is #VALUE!.",
        "`#N/A` a needed input is blank; flux in: … where film and radiation begin; may stand beside them",
    ),
    (
        "A film of 0 is allowed and carries no heat; a negative one is #NUM!. With no other way out the row is #NUM!.",
        "A row from which no heat can leave is `#NUM!`",
    ),
    (
        "Heat cannot leave through a flux put in, even a negative one: flux-only rows are #NUM!.",
        "A row from which no heat can leave is `#NUM!`",
    ),
    ("A state below absolute zero anywhere in the body is #NUM!.", "`#NUM!` an impossible value, or no steady state"),
    (
        "A probe outside the body makes the whole row #NUM!; a blank probe makes only `probe temperature` #N/A.",
        "place (from the left face, or the radius) where a temperature is asked; `#NUM!` an impossible value",
    ),
    (
        "Heat out at a face is what leaves the body there, net of flux in, negative when it enters, so left plus "
        "right equals heat made.",
        "left heat out: W/m² (of that face), W/m, W; flux in: put into the body at its outermost surface",
    ),
    (
        "W needs the area of a wall or the length of a cylinder (else #N/A), W/m is of cylinders only and `heat made` "
        "in W/m² of walls only (#N/A for other shapes).",
        "by the unit asked: W/m² (of that face), W/m, W",
    ),
    (
        "`left share` counts only faces that heat leaves by: 0 % if heat enters on the left; #NUM! if none "
        "leaves (less than 1e-11 of the largest heat).",
        "% of all heat leaving that leaves on the left",
    ),
    (
        "`line power` is of cylinders; on a wall it is #N/A, on a sphere #VALUE!.",
        "spread evenly over the layer's volume (needs `area`, `length` or a sphere)",
    ),
    (
        "`allowable X` is answered when the row's source is of kind X, else #N/A; with the row's source blank, when X "
        "is the table's one and only source heading. All other answers of such a row are #N/A.",
        "sources of that kind scale together, everything else stays; blank or 0 may stand in the only source column",
    ),
    (
        "The allowable is the smallest source >= 0 at which a limit is reached, also when the row's source is negative; "
        "utilisation is then negative.",
        "source at which the first limit is reached; % of the allowable now used",
    ),
    (
        "No limit filled in: allowables, `limited by`, `headroom`, `utilisation` are #N/A. A limit that no source can "
        "reach (a held face): #NUM! for allowables and utilisation. Allowable exactly 0: utilisation #NUM!.",
        "`#N/A` a needed input is blank; `#NUM!` an impossible value; A limit broken with no source is `#NUM!`",
    ),
    (
        "`limited by` is the limit that sets the allowable, as `limit`, `limit 1`, `left limit`, `right limit` "
        "whatever the spelling used; if there is no allowable, the one with the least kelvin left. `headroom` is of "
        "that limit at the present source, negative when it is broken. `limited by` is answered for a blank source too, "
        "as the allowable is.",
        "which limit (or `runaway`); kelvin left before it",
    ),
    (
        "`over limit` when any limit is exceeded at the present source, equal is `ok`.",
        "`ok`, `caution`, `over limit`, `no limit`",
    ),
    (
        "Percent answers may be asked with [%], nothing (percent) or [-] (a fraction).",
        "`[-]` is dimensionless; A quantity with a dimension must carry its unit",
    ),
    ("Where a body is at one temperature the peak's place is its left face.", "where (from the left face, or the radius)"),
    (
        "In `conductivity`, `generation` and `resistivity` a text with a `:` is a text table; any other text is #VALUE!.",
        "a number or a text table; A number stored as text is `#VALUE!`",
    ),
    ("BTU is the international table one, 1055.05585262 J; lb is the avoirdupois pound.", "then pint reads it"),
    (
        "A heading with a layer number beyond 4, filled in, is out of scope; unnumbered kinds take no number.",
        "A number ending a name is a layer",
    ),
    *WIDER,
)
