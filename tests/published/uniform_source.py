"""One layer, constant conductivity, a uniform source or none: the physics of one march."""

from published.check import Check, Number

CHECKS = (
    Check(
        "aster-tpla300",
        "uniform generation, solid cylinder",
        (
            Number("radius", 5.0, "m"),
            Number("k", 0.04, "W/m/K"),
            Number("q", 1.0, "W/m3"),
            Number("outer face", 0.0, "degC"),
        ),
        (
            Number("T centre", 156.25, "degC", 1e-06),
            Number("T at r = 1.25, 2.5, 3.75 m", (146.48, 117.19, 68.36), "degC", 0.006),
        ),
        source="EDF Code_Aster validation manual V4.01.300 (TPLA300), reference table; T=6.25(25-r^2)",
        standing="printed figure seen in a stored public copy",
    ),
    Check(
        "aster-tpll01",
        "plane wall, convection and flux",
        (
            Number("thickness", 0.05, "m"),
            Number("k", 0.75, "W/m/K"),
            Number("side 1: h, fluid", (30.0, 140.0), "W/m2/K, degC"),
            Number("side 2 leaving flux", 1200.0, "W/m2"),
        ),
        (
            Number("T side 1", 100.0, "degC", 1e-09),
            Number("T side 2", 20.0, "degC", 1e-09),
            Number("mid-plane", 60.0, "degC", 1e-09),
        ),
        source="EDF Code_Aster validation manual V4.02.001 (TPLL01), from VPCS guide",
        standing="printed figure seen in a stored public copy",
        note="no generation: baseline",
    ),
    Check(
        "aster-tpla01",
        "hollow cylinder, convection outside",
        (
            Number("inner radius (inferred)", 0.3, "m"),
            Number("outer radius (inferred)", 0.35, "m"),
            Number("k", 1.0, "W/m/K"),
            Number("inner face", 100.0, "degC"),
            Number("outer h, fluid", (500.0, 17.034444), "W/m2/K, degC"),
        ),
        (
            Number("T outer", 20.0, "degC", 0.001),
            Number("T at r = 0.32 m", 66.506, "degC", 0.001),
            Number("flux at inner face", 1729.91, "W/m2", 0.01),
        ),
        source="EDF Code_Aster validation manual V4.01.001 (TPLA01), from VPCS guide",
        standing="printed figure seen in a stored public copy",
    ),
    Check(
        "mean-to-peak-ratios",
        "uniform generation, mean temperature",
        (Number("solid body, faces at Ts, constant k", "-", "-"),),
        (
            Number("slab peak rise / (q a^2/k)", 0.5, "-", 1e-12),
            Number("cylinder", 0.25, "-", 1e-12),
            Number("sphere", 0.16666666666666666, "-", 1e-12),
            Number("slab mean/peak rise", 0.6666666666666666, "-", 1e-12),
            Number("cylinder mean/peak", 0.5, "-", 1e-12),
            Number("sphere mean/peak", 0.4, "-", 1e-12),
        ),
        source="Carslaw & Jaeger 1959 (secs 3.14, 7.9, 9.8 heat production in slab, cylinder, sphere)",
        standing="from memory, recomputed",
    ),
    Check(
        "conductor-radial-rise",
        "uniform generation, hollow cylinder, insulated bore",
        (
            Number("outer, core diameter (ACSR Drake)", (0.0281, 0.0104), "m"),
            Number("heat generated in the outer annulus", 85.0, "W/m"),
            Number("effective radial k", 1.5, "W/m/K"),
        ),
        (
            Number("core minus surface temperature", 3.0865665340347572, "K", 1e-08),
            Number("solid limit d->0: P/(4 pi k)", 4.509390054270368, "K", 1e-10),
        ),
        source=(
            "CIGRE TB 601 (2014) eq. for core-surface difference; same form in IEEE 738-2012 sec. 4.4 and Morgan, Thermal"
            " Behaviour of Electrical Conductors (1991)"
        ),
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
        note="dT = P/(2 pi k) [1/2 - d^2/(D^2-d^2) ln(D/d)]",
    ),
    Check(
        "iec60287-T1",
        "layer resistance",
        (
            Number("insulation thermal resistivity (XLPE)", 3.5, "K m/W"),
            Number("conductor diameter", 0.0302, "m"),
            Number("insulation thickness", 0.008, "m"),
        ),
        (Number("T1 = rho/(2 pi) ln(1+2 t1/dc)", 0.23681977933609158, "K m/W", 1e-09),),
        source="IEC 60287-2-1 sec. 4.1.2 (single-core), Table 1 (XLPE 3.5 K m/W)",
        standing="published formula from memory; numbers chosen and computed for this list",
    ),
    Check(
        "allowable-generation",
        "allowable generation for a temperature limit",
        (
            Number("half thickness or radius", 0.02, "m"),
            Number("k", 1.2, "W/m/K"),
            Number("h", 25.0, "W/m2/K"),
            Number("fluid", 20.0, "degC"),
            Number("centre limit", 90.0, "degC"),
        ),
        (Number("q slab, cylinder, sphere", (72413.79310344828, 144827.58620689655, 217241.37931034484), "W/m3", 1e-06),),
        source="closed form q = (Tmax-Tf)/[a^2/(2(j+1)k) + a/((j+1)h)], Carslaw & Jaeger type",
        standing="from memory, recomputed",
    ),
)
