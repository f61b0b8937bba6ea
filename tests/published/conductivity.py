"""Conductivities that change with temperature, layers and their joints."""

from published.check import Check, Number

CHECKS = (
    Check(
        "layered-cylinder-contact",
        "several layers with contact resistance",
        (
            Number("core radius, k, q", (0.0041, 3.0, 300000000.0), "m, W/m/K, W/m3"),
            Number("gap conductance at mean gap radius", (5678.0, 0.00414), "W/m2/K, m"),
            Number("tube radii, k", (0.00418, 0.00475, 16.0), "m, m, W/m/K"),
            Number("outside h, fluid", (30000.0, 310.0), "W/m2/K, degC"),
        ),
        (
            Number("linear power", 15843.05175205333, "W/m", 1e-06),
            Number("T tube outer", 327.69473684210527, "degC", 1e-08),
            Number("T tube inner", 347.84047723349124, "degC", 1e-08),
            Number("T core surface", 455.10676307612823, "degC", 1e-08),
            Number("T axis", 875.3567630761282, "degC", 1e-08),
        ),
        source=(
            "series radial resistance: ASTM C680-19 sec. 6 (cylindrical) and NUREG/CR-7022 (FRAPCON-3.4, 2011) heat "
            "conduction section; gap conductance 5678 W/m2/K = 1000 Btu/h ft2 F"
        ),
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
        note="state at which radius the contact conductance acts",
    ),
    Check(
        "kirchhoff-linear-k-slab",
        "linear k(T)",
        (
            Number("half thickness", 0.03, "m"),
            Number("k = k0[1+b(T-Ts)]", (20.0, 0.015), "W/m/K, 1/K"),
            Number("q", 4000000.0, "W/m3"),
            Number("face Ts", 50.0, "degC"),
        ),
        (Number("T centre", 111.56922707780896, "degC", 1e-08),),
        source="Kirchhoff transform, Carslaw & Jaeger 1959 sec. 1.6",
        standing="from memory, recomputed",
        note="constant-k answer would be 140.0 degC",
    ),
    Check(
        "linear-k-mean-rule",
        "linear k(T), no generation, cylinder",
        (
            Number("k = k0(1+bT[degC])", (0.045, 0.0025), "W/m/K, 1/K"),
            Number("radii", (0.05, 0.1), "m"),
            Number("faces", (300.0, 40.0), "degC"),
        ),
        (Number("heat flow per length = 2 pi k(mean T) dT/ln(r2/r1)", 151.1315489292278, "W/m", 1e-08),),
        source="ASTM C680-19 (temperature-dependent conductivity solutions for slab, cylinder, sphere)",
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
    ),
    Check(
        "uo2-conductivity",
        "k(T) correlation",
        (
            Number("T", (500.0, 1000.0, 1500.0, 2000.0, 2500.0), "K"),
            Number("porosity", 0.05, "-"),
        ),
        (
            Number(
                "k, 95 % dense",
                (5.784098697425301, 3.467387655291933, 2.412148833602836, 2.0614775558956184, 2.2804366454604392),
                "W/m/K",
                0.0001,
            ),
            Number(
                "k, fully dense",
                (6.6973774391240335, 4.014869916653818, 2.793014438908547, 2.386974012089664, 2.640505589480509),
                "W/m/K",
                0.0001,
            ),
        ),
        source=(
            "Popov, Carbajo, Ivanov & Yoder, ORNL/TM-2000/351 (2000), eq. 6.2 and Maxwell-type porosity factor "
            "(1-p)/(1+2p); Fink, J. Nucl. Mater. 279 (2000) 1, 95 %: 100/(7.5408+17.692t+3.6142t^2)+6400 t^-5/2 "
            "exp(-16.35/t)"
        ),
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
    ),
    Check(
        "nist-304-conductivity",
        "tabulated k(T)",
        (
            Number("T", (4.0, 20.0, 77.0, 150.0, 300.0), "K"),
            Number(
                "log10 k = sum a_i (log10 T)^i, a..i", (-1.4087, 1.3982, 0.2543, -0.626, 0.2334, 0.4256, -0.4658, 0.165, -0.0199), "-"
            ),
        ),
        (
            Number(
                "k", (0.2723961889664812, 2.1686224062946455, 7.9206516022584, 11.165154358588293, 15.308653824348747), "W/m/K", 0.001
            ),
            Number("integral 4-300 K", 3030.843583082396, "W/m", 0.5),
            Number("integral 77-300 K", 2704.7130656896447, "W/m", 0.5),
        ),
        source=(
            "NIST Cryogenic Materials database, 304 stainless (4-300 K fit, 2 % error); Marquardt, Le & Radebaugh 2000; "
            "Ekin 2006 Table A2.1 lists 3060 W/m for 4-300 K"
        ),
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
        note="sensitive to 4-decimal rounding of coefficients",
    ),
    Check(
        "nbs-copper-conductivity",
        "tabulated k(T)",
        (
            Number("T", (20.0, 77.0, 150.0, 300.0, 400.0), "K"),
            Number("RRR", 100.0, "-"),
        ),
        (
            Number(
                "k", (2420.3266378199346, 544.4577375069856, 418.78863626365523, 396.9871034664067, 390.70697855899783), "W/m/K", 0.01
            ),
        ),
        source=(
            "Hust & Lankford, NBSIR 84-3007 (1984), copper; recommended 401 W/m/K at 300 K and 393 at 400 K for pure "
            "copper (Ho, Powell & Liley, JPCRD 1972/74)"
        ),
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
    ),
    Check(
        "manufactured-solution",
        "verification practice, all three shapes, k(T)",
        (
            Number("T(x)", "300 + 80 sin(2x) + 30 x, x in [0.5, 1.5]", "K"),
            Number("k(T)", "2 + 0.01 (T-300)", "W/m/K"),
            Number("q(x)", "-[k T'' + 0.01 T'^2 + (j/x) k T']", "W/m3"),
        ),
        (
            Number("T(1.0) for j = 0,1,2", 402.74379414605454, "K", 1e-06),
            Number("T peak place", 0.8797063564851516, "m", 1e-06),
        ),
        source="method of manufactured solutions: ASME V&V 20-2009 sec. 2; Roache, J. Fluids Eng. 124 (2002) 4",
        standing="published formula from memory; numbers chosen and computed for this list",
    ),
)
