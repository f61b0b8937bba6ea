"""Sources linear in temperature, and resistances that rise with it."""

from published.check import Check, Number

CHECKS = (
    Check(
        "linear-source-critical-fixed-faces",
        "generation linear in T",
        (Number("q = q0[1+beta(T-Ts)]", "m^2 = beta q0 a^2/k", "-"),),
        (
            Number("slab m_c^2 = pi^2/4", 2.4674011002723395, "-", 1e-12),
            Number("cylinder m_c^2 = j01^2", 5.783185962946784, "-", 1e-12),
            Number("sphere m_c^2 = pi^2", 9.869604401089358, "-", 1e-12),
        ),
        source=(
            "Carslaw & Jaeger, Conduction of Heat in Solids (2nd ed. 1959), sections on heat production linear in "
            "temperature; Bessel zero DLMF 10.21 / A&S Table 9.5 (2.4048255577)"
        ),
        standing="from memory, recomputed",
        note="a = half thickness or radius; above m_c no steady state",
    ),
    Check(
        "linear-source-critical-convective",
        "generation linear in T",
        (Number("Bi", (0.1, 1.0, 10.0), "-"),),
        (
            Number("slab zeta1, zeta tan zeta = Bi", (0.3110528482002782, 0.8603335890193797, 1.4288700112140738), "-", 1e-09),
            Number("cylinder zeta1, zeta J1 = Bi J0", (0.44168178287484144, 1.255783711794593, 2.179496596664459), "-", 1e-09),
            Number("sphere zeta1, 1 - zeta cot zeta = Bi", (0.5422808854161558, 1.5707963267953025, 2.8363003893485033), "-", 1e-09),
        ),
        source=(
            "Carslaw & Jaeger App. IV root tables; Abramowitz & Stegun Table 4.20 (roots of x tan x) and 9.7; published "
            "4-digit values 0.3111/0.8603/1.4289, 0.4417/1.2558/2.1795, 0.5423/1.5708/2.8363"
        ),
        standing="from memory, recomputed",
        note="runaway when beta q0 a^2/k = zeta1^2",
    ),
    Check(
        "linear-source-temperature",
        "generation linear in T",
        (
            Number("m = a sqrt(beta q0/k)", 1.0, "-"),
            Number("faces", "held at Ts", "-"),
        ),
        (
            Number("slab beta(Tc-Ts) = sec m - 1", 0.8508157176809255, "-", 1e-10),
            Number("cylinder 1/J0(m) - 1", 0.30685183393356524, "-", 1e-10),
            Number("sphere m/sin m - 1", 0.18839510577812124, "-", 1e-10),
            Number("slab heat out / q0 a = tan(m)/m", 1.5574077246549023, "-", 1e-10),
            Number("cylinder face flux/(q0 a) = J1/(m J0)", 0.5750809150043059, "-", 1e-10),
        ),
        source=(
            "Jakob, Heat Transfer Vol. I (Wiley 1949), electrically heated bodies with resistivity linear in temperature;"
            " Carslaw & Jaeger"
        ),
        standing="from memory, recomputed",
        note="beta in 1/K, temperature rise = value/beta",
    ),
    Check(
        "thin-wire-runaway",
        "electric current, lumped runaway",
        (
            Number("wire diameter", 0.001, "m"),
            Number("h", 20.0, "W/m2/K"),
            Number("rho20", 1.724137931034483e-08, "ohm m"),
            Number("alpha20", 0.00393, "1/K"),
            Number("ambient", 20.0, "degC"),
        ),
        (
            Number("runaway current = sqrt(h P A/(rho20 alpha20))", 26.986874937826755, "A", 0.0001),
            Number("temperature at half that current", 104.81764206955046, "degC", 0.001),
        ),
        source="lumped balance I^2 R20[1+alpha(T-20)] = hP(T-Ta); limit of the Bessel solution as Bi -> 0",
        standing="derived and computed for this list",
    ),
    Check(
        "iec60228-resistance",
        "resistance rising with T",
        (
            Number("copper class 2, 630 mm2, R20", 0.0283, "ohm/km"),
            Number("10 mm2", 1.83, "ohm/km"),
            Number("alpha20", 0.00393, "1/K"),
        ),
        (
            Number("R at 90 degC, 630 mm2", 0.03608533, "ohm/km", 1e-07),
            Number("R at 70 degC, 10 mm2", 2.1895949999999997, "ohm/km", 1e-06),
            Number("correction factor R20/R(t) printed for 35, 70, 90 degC", (0.943, 0.833, 0.781), "-", 0.0006),
        ),
        source="IEC 60228:2004 Table 2 and its temperature-correction table",
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
        note=(
            "SMALL DISAGREEMENT: IEC 60228 correction table uses alpha = 0.004, IEC 60287 uses 0.00393 (0.781 vs 0.784 at 90 degC)"
        ),
    ),
)
