"""Uncertainties: the published examples of the law of propagation and of Monte Carlo."""

from published.check import Check, Number

CHECKS = (
    Check(
        "gum-H2",
        "uncertainty, correlated inputs",
        (
            Number("V", (5.007, 4.994, 5.005, 4.99, 4.999), "V"),
            Number("I", (19.663, 19.639, 19.64, 19.685, 19.678), "mA"),
            Number("phi", (1.0456, 1.0438, 1.0468, 1.0428, 1.0433), "rad"),
        ),
        (
            Number("R, X, Z", (127.732, 219.847, 254.26), "ohm", 0.0006),
            Number("u(R), u(X), u(Z)", (0.071, 0.295, 0.236), "ohm", 0.0008),
            Number("r(R,X), r(R,Z), r(X,Z)", (-0.588, -0.485, 0.993), "-", 0.001),
        ),
        source="JCGM 100:2008, H.2, Tables H.2-H.4",
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
    ),
    Check(
        "gum-H1",
        "uncertainty, degrees of freedom",
        (
            Number("components", (25.0, 9.7, 2.9, 16.6), "nm"),
            Number("degrees of freedom", (18, 25.6, 50, 2), "-"),
        ),
        (
            Number("combined standard uncertainty", 32.0, "nm", 0.5),
            Number("effective degrees of freedom", 16.0, "-", 1.0),
        ),
        source="JCGM 100:2008, H.1 (end gauge), first-order result",
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
        note="GUM adds second-order terms giving 34 nm",
    ),
    Check(
        "jcgm101-9.2.2-normal",
        "uncertainty, Monte Carlo",
        (Number("Y = X1+X2+X3+X4, each N(0,1)", "-", "-"),),
        (
            Number("u(Y)", 2.0, "-", 0.01),
            Number("95 % interval", (-3.92, 3.92), "-", 0.01),
        ),
        source="JCGM 101:2008, 9.2.2, Table 2",
        standing="printed figure seen in a stored public copy",
    ),
    Check(
        "jcgm101-9.2.3-rectangular",
        "uncertainty, Monte Carlo",
        (Number("Y = sum of four rectangular, mean 0, sd 1", "-", "-"),),
        (
            Number("u(Y)", 2.0, "-", 0.01),
            Number("95 % interval", (-3.88, 3.88), "-", 0.01),
            Number("exact upper end", 3.87940674134783, "-", 0.001),
        ),
        source="JCGM 101:2008, 9.2.3, Table 3 (analytic 2 sqrt3 [2-(3/5)^(1/4)])",
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
    ),
    Check(
        "jcgm101-9.2.4-dominant",
        "uncertainty, Monte Carlo",
        (Number("three rectangular sd 1 and one rectangular sd 10", "-", "-"),),
        (
            Number("u(Y) = sqrt 103", 10.14889156509222, "-", 0.02),
            Number("95 % interval by Monte Carlo", (-17.0, 17.0), "-", 0.05),
            Number("95 % interval by the law of propagation with normal", (-19.9, 19.9), "-", 0.05),
        ),
        source="JCGM 101:2008, 9.2.4, Table 4",
        standing="from memory, recomputed",
        note="shows where a first-order band is too wide",
    ),
    Check(
        "nist-tn1900-E13",
        "uncertainty, quotient model",
        (
            Number("L0", (1.4999, 0.0001), "m"),
            Number("L1", (1.5021, 0.0002), "m"),
            Number("T0", (288.15, 0.02), "K"),
            Number("T1", (373.1, 0.05), "K"),
            Number("model", "(L1-L0)/(L0 (T1-T0))", "-"),
        ),
        (
            Number("alpha", 1.7266e-05, "1/K", 1e-09),
            Number("u(alpha)", 1.76e-06, "1/K", 1e-08),
        ),
        source="NIST Technical Note 1900 (2015), example E13; NIST Uncertainty Machine example",
        standing="printed figure seen in a stored public copy",
        note="the listed scale is the standard deviation (3 d.o.f. t shape only changes the tails)",
    ),
    Check(
        "nist-num-stefan-boltzmann",
        "uncertainty, product of powers",
        (
            Number("h, R, Rinf, Ar(e), alpha", (6.62606957e-34, 8.3144621, 10973731.568539, 0.00054857990946, 0.0072973525698), "SI"),
            Number("standard uncertainties", (2.9e-41, 7.5e-06, 5.5e-05, 2.2e-13, 2.4e-12), "SI"),
        ),
        (
            Number("sigma", 5.67037e-08, "W/m2/K4", 1e-13),
            Number("u(sigma)", 2.05e-13, "W/m2/K4", 1e-15),
        ),
        source="NIST Uncertainty Machine user manual, example 10 (Stefan-Boltzmann constant)",
        standing="printed figure seen in a stored public copy",
    ),
    Check(
        "npl-log-uniform",
        "uncertainty, strongly nonlinear",
        (Number("y = ln x, x rectangular on [0.1, 1.1]", "-", "-"),),
        (
            Number("mean", -0.665, "-", 0.001),
            Number("standard deviation", 0.606, "-", 0.001),
            Number("first-order y, u", (-0.511, 0.481), "-", 0.001),
            Number("shortest 95 % interval", (-1.895, 0.095), "-", 0.003),
        ),
        source="NPL Report DEM-ES-011 (Cox & Harris, Best Practice Guide No. 6), sec. 9.2, Table 9.2",
        standing="printed figure seen in a stored public copy",
    ),
)
