"""Resistivities and the currents a temperature allows."""

from published.check import Check, Number

CHECKS = (
    Check(
        "lorenz-number",
        "electric current, k rho = L0 T",
        (Number("k_B, e (SI exact)", (1.380649e-23, 1.602176634e-19), "J/K, C"),),
        (Number("L0 = (pi^2/3)(k_B/e)^2", 2.443004509073667e-08, "V2/K2", 1e-15),),
        source="CODATA/SI 2019 constants; Sommerfeld value 2.44e-8 (NBSIR 84-3007 uses 2.443e-8)",
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
    ),
    Check(
        "copper-iacs",
        "resistivity constants",
        (Number("annealed copper standard", "IEC 60028", "-"),),
        (
            Number("rho20", 0.017241379310344827, "ohm mm2/m", 1e-06),
            Number("alpha20 (constant mass)", 0.00393, "1/K", 0),
            Number("aluminium IEC 60287-1-1: rho20", 2.8264e-08, "ohm m", 0),
            Number("aluminium alpha20", 0.00403, "1/K", 0),
        ),
        source="IEC 60028 (1925); IEC 60287-1-1 Table 1; NBS Handbook 100 (1966)",
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
    ),
    Check(
        "cda-busbar-ampacity",
        "current rating, natural convection + radiation (validation)",
        (
            Number("copper bar", "1/4 x 2 in on edge, still indoor air", "-"),
            Number("R20", 16.5, "microhm/ft"),
            Number("skin ratio", 1.04, "-"),
            Number("emissivity", 0.4, "-"),
            Number("ambient", 40.0, "degC"),
        ),
        (Number("60 Hz ampacity at 30, 50, 65 K rise", (710.0, 940.0, 1100.0), "A", 112.8),),
        source=(
            "Copper Development Association Inc., Ampacities of Copper No. 110 bus bars, Table 1 (after Dwight, "
            "Electrical Coils and Conductors, 1945)"
        ),
        standing="printed figure seen in a stored public copy",
        note="handbook rounding and a different convection law: validation only, not verification",
    ),
)
