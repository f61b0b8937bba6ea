"""Sources that rise exponentially with temperature: critical values and the states below them."""

from published.check import Check, Number

CHECKS = (
    Check(
        "fk-slab-critical",
        "thermal explosion",
        (
            Number("geometry j", 0, "-"),
            Number("faces", "held at Ta", "-"),
            Number("source", "exp(theta)", "-"),
        ),
        (
            Number("delta_c", 0.8784576797812903, "-", 1e-09),
            Number("theta_centre at delta_c", 1.186842168634389, "-", 1e-06),
        ),
        source=(
            "Frank-Kamenetskii, Diffusion and Heat Transfer in Chemical Kinetics (1969 transl.), thermal explosion "
            "chapter (0.878); exact: delta_c = 2 L^2 with L the Laplace limit constant, OEIS A033259 = "
            "0.66274341934918158097...; abstract of Boddington, Gray & Robinson, Proc. R. Soc. A 368 (1979) gives ca. "
            "0.88, 2, 3.32"
        ),
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
        note=(
            "theta=E(T-Ta)/(R Ta^2); delta=E Q a^2 rate(Ta)/(k R Ta^2); theta\"+(j/x)theta'+delta e^theta=0, theta(1)=0; a"
            " = half thickness or radius"
        ),
    ),
    Check(
        "fk-cylinder-critical",
        "thermal explosion",
        (
            Number("geometry j", 1, "-"),
            Number("faces", "held at Ta", "-"),
        ),
        (
            Number("delta_c", 2.0, "-", 1e-09),
            Number("theta_centre", 1.3862943611198906, "-", 1e-06),
        ),
        source=(
            "Chambre, J. Chem. Phys. 20 (1952) 1795 (closed form theta=2 ln[(1+b)/(1+b x^2)]); Frank-Kamenetskii; value 2"
            " in Boddington-Gray-Robinson abstract"
        ),
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
        note=(
            "theta=E(T-Ta)/(R Ta^2); delta=E Q a^2 rate(Ta)/(k R Ta^2); theta\"+(j/x)theta'+delta e^theta=0, theta(1)=0; a"
            " = half thickness or radius"
        ),
    ),
    Check(
        "fk-sphere-critical",
        "thermal explosion",
        (
            Number("geometry j", 2, "-"),
            Number("faces", "held at Ta", "-"),
        ),
        (
            Number("delta_c", 3.321992118339824, "-", 1e-08),
            Number("theta_centre", 1.607456775083842, "-", 1e-06),
            Number("Emden variable xi", 4.07149684429814, "-", 1e-06),
        ),
        source="Frank-Kamenetskii (3.32); Steggerda, J. Chem. Phys. 43 (1965) 4446 gives 3.32199212 for the sphere",
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
        note=(
            "theta=E(T-Ta)/(R Ta^2); delta=E Q a^2 rate(Ta)/(k R Ta^2); theta\"+(j/x)theta'+delta e^theta=0, theta(1)=0; a"
            " = half thickness or radius; turning point is xi psi'=2"
        ),
    ),
    Check(
        "bratu-critical",
        "thermal explosion",
        (Number("problem", 'u"+lambda e^u=0, u(0)=u(1)=0', "-"),),
        (
            Number("lambda_c", 3.513830719125161, "-", 1e-08),
            Number("u_max at lambda_c", 1.186842168634389, "-", 1e-06),
            Number("theta parameter 4x", 4.798714561030935, "-", 1e-07),
        ),
        source=(
            "Bratu-Gelfand problem; lambda_c = 8 L^2, L Laplace limit (OEIS A033259); 3.513830719 in e.g. Buckmire, "
            "Numer. Meth. PDE 20 (2004) 327; Ascher, Mattheij & Russell (SIAM 1995)"
        ),
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
        note="full thickness 1, so lambda = 4 delta",
    ),
    Check(
        "bratu-lambda1",
        "thermal explosion",
        (Number("lambda", 1.0, "-"),),
        (
            Number("u(1/2), stable branch", 0.1405392144004718, "-", 1e-08),
            Number("u(1/2), unstable branch", 4.091467246189261, "-", 1e-06),
        ),
        source=(
            "Bratu-Gelfand exact solution u=-2 ln[cosh((x-1/2)th/2)/cosh(th/4)], th = sqrt(2 lambda) cosh(th/4): th = "
            "1.5171645990 and 10.938702772 (e.g. Buckmire 2004)"
        ),
        standing="from memory, recomputed",
        note="A solver must return the lower branch",
    ),
    Check(
        "fk-subcritical",
        "thermal explosion",
        (
            Number("slab delta", 0.5, "-"),
            Number("cylinder delta", 1.0, "-"),
        ),
        (
            Number("slab theta centre", 0.3289524213411136, "-", 1e-08),
            Number("cylinder theta centre = 2 ln(4-2 sqrt 2)", 0.3166943676407499, "-", 1e-08),
        ),
        source="exact solutions: slab (Frank-Kamenetskii), cylinder (Chambre 1952)",
        standing="from memory, recomputed",
    ),
    Check(
        "fk-slab-convective-critical",
        "thermal explosion",
        (Number("Bi = h a/k", (1.0, 2.0, 5.0, 10.0, 100.0), "-"),),
        (
            Number(
                "delta_c(Bi)",
                (0.2706705664732254, 0.42084663155607765, 0.6193720467646865, 0.7289761161855672, 0.8611861650539518),
                "-",
                1e-06,
            ),
            Number(
                "theta_centre(Bi)",
                (1.1050252026730205, 1.144377551341548, 1.1750642535865266, 1.1832496333692415, 1.1867991163720197),
                "-",
                1e-05,
            ),
        ),
        source="Thomas, Trans. Faraday Soc. 54 (1958) 60; Barzykin & Merzhanov 1958",
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
        note=(
            "closed forms: slab delta=2D^2 sech^2 D exp(-2D tanh D/Bi); cylinder b=-2/Bi+sqrt(1+4/Bi^2), delta=8b/(1+b)^2"
            " exp(-4b/((1+b)Bi)). Limits: Bi->inf 0.8785/2/3.3220; Bi->0 delta -> (j+1) Bi/e"
        ),
    ),
    Check(
        "fk-cylinder-convective-critical",
        "thermal explosion",
        (Number("Bi = h a/k", (1.0, 2.0, 5.0, 10.0, 100.0), "-"),),
        (
            Number(
                "delta_c(Bi)",
                (0.5757989830253525, 0.9223175840144069, 1.394292207043459, 1.6538366563769529, 1.9605933863488252),
                "-",
                1e-06,
            ),
            Number(
                "theta_centre(Bi)",
                (1.187802733500894, 1.2789336181868503, 1.3570193138592699, 1.3776535963307992, 1.3861956992126145),
                "-",
                1e-05,
            ),
        ),
        source="Thomas, Trans. Faraday Soc. 54 (1958) 60; Barzykin & Merzhanov 1958",
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
        note=(
            "closed forms: slab delta=2D^2 sech^2 D exp(-2D tanh D/Bi); cylinder b=-2/Bi+sqrt(1+4/Bi^2), delta=8b/(1+b)^2"
            " exp(-4b/((1+b)Bi)). Limits: Bi->inf 0.8785/2/3.3220; Bi->0 delta -> (j+1) Bi/e"
        ),
    ),
    Check(
        "semenov-critical",
        "thermal explosion",
        (
            Number("lumped body", "uniform temperature, rate exp(theta)", "-"),
            Number("Arrhenius eps = R Ta/E", (0.0, 0.05), "-"),
        ),
        (
            Number("psi_c (eps=0)=1/e", 0.36787944117144233, "-", 1e-12),
            Number("theta_c (eps=0)", 1.0, "-", 1e-12),
            Number("theta_c (eps=0.05)", 1.1145618000168334, "-", 1e-09),
            Number("psi_c (eps=0.05)", 0.3877995227616363, "-", 1e-09),
        ),
        source="Semenov 1928; critical value 1/e also in Williams, Combustion Theory (2nd ed.), App. B.2",
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
        note="psi = lumped generation/(h A R Ta^2/E)",
    ),
    Check(
        "arrhenius-finite-eps-critical",
        "thermal explosion",
        (
            Number("rate", "exp[theta/(1+eps theta)]", "-"),
            Number("eps", (0.02, 0.05), "-"),
            Number("j", (0, 1, 2), "-"),
        ),
        (
            Number("delta_c j=0 eps=0.02", 0.8974530277440665, "-", 1e-06),
            Number("delta_c j=0 eps=0.05", 0.9283999787545932, "-", 1e-06),
            Number("delta_c j=1 eps=0.02", 2.0450463948475255, "-", 1e-06),
            Number("delta_c j=1 eps=0.05", 2.118586665672585, "-", 1e-06),
            Number("delta_c j=2 eps=0.02", 3.3996807367144046, "-", 1e-06),
            Number("delta_c j=2 eps=0.05", 3.5267609347272866, "-", 1e-06),
            Number("theta0 j=0 eps=0.02", 1.239056191771144, "-", 0.0001),
            Number("theta0 j=0 eps=0.05", 1.3292032581475823, "-", 0.0001),
            Number("theta0 j=1 eps=0.02", 1.4501654185133737, "-", 0.0001),
            Number("theta0 j=1 eps=0.05", 1.5608737429892974, "-", 0.0001),
            Number("theta0 j=2 eps=0.02", 1.685123142727525, "-", 0.0001),
            Number("theta0 j=2 eps=0.05", 1.8202783908567173, "-", 0.0001),
        ),
        source=(
            "Boddington, Gray & Wake, Proc. R. Soc. A 357 (1977) 403 (tables); problem statement in Boddington-Gray-Robinson abstract"
        ),
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
        note="exact Arrhenius, not the exponential approximation",
    ),
    Check(
        "arrhenius-transition",
        "thermal explosion",
        (Number("rate", "exp[theta/(1+eps theta)]", "-"),),
        (
            Number("slab eps_tr", 0.2457804, "-", 1e-06),
            Number("slab delta_tr", 1.307374, "-", 1e-05),
            Number("slab theta_tr", 4.89657, "-", 0.001),
            Number("cylinder eps_tr", 0.2421062, "-", 1e-06),
            Number("cylinder delta_tr", 3.006301, "-", 1e-05),
            Number("sphere eps_tr", 0.2387971, "-", 1e-06),
            Number("sphere delta_tr", 5.041112, "-", 1e-05),
            Number("lumped eps_tr", 0.25, "-", 1e-12),
            Number("lumped psi_tr = 4/e^2", 0.5413411329464508, "-", 1e-12),
        ),
        source=(
            'Boddington, Gray & Robinson, Proc. R. Soc. Lond. A 368 (1979) 441, "Thermal explosions and the disappearance'
            ' of criticality at small activation energies: exact results for the slab"'
        ),
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
        note='above eps_tr there is no runaway: solver must report "no critical generation"',
    ),
    Check(
        "fk-dimensional-critical-temperature",
        "thermal explosion",
        (
            Number(
                "slab half thickness a, density, heat of reaction, frequency factor, activation energy, conductivity",
                {
                    "HMX": {
                        "a_cm": 0.033,
                        "rho_g_cm3": 1.81,
                        "Q_cal_g": 500,
                        "Z_1_s": 5e19,
                        "E_kcal_mol": 52.7,
                        "k_cal_cm_s_K": 0.0007,
                    },
                    "TNT": {
                        "a_cm": 0.038,
                        "rho_g_cm3": 1.57,
                        "Q_cal_g": 300,
                        "Z_1_s": 251000000000.0,
                        "E_kcal_mol": 34.4,
                        "k_cal_cm_s_K": 0.0005,
                    },
                    "TATB": {
                        "a_cm": 0.033,
                        "rho_g_cm3": 1.84,
                        "Q_cal_g": 600,
                        "Z_1_s": 3.18e19,
                        "E_kcal_mol": 59.9,
                        "k_cal_cm_s_K": 0.001,
                    },
                    "HNS": {
                        "a_cm": 0.037,
                        "rho_g_cm3": 1.65,
                        "Q_cal_g": 500,
                        "Z_1_s": 1530000000.0,
                        "E_kcal_mol": 30.3,
                        "k_cal_cm_s_K": 0.0005,
                    },
                },
                "cal-cm-g-s",
            ),
            Number("delta (slab, as used in the source)", 0.88, "-"),
            Number("gas constant", 1.987, "cal/mol/K"),
        ),
        (
            Number("critical surface temperature HMX", 253, "degC", 1.0),
            Number("critical surface temperature TNT", 291, "degC", 1.0),
            Number("critical surface temperature TATB", 334, "degC", 1.0),
            Number("critical surface temperature HNS", 316, "degC", 1.0),
        ),
        source=(
            "Rogers, Thermochim. Acta 11 (1975) 131; table reprinted in LASL Explosive Property Data (Gibbs & Popolato, "
            "1980), thermal stability section"
        ),
        standing="partly seen in a stored public copy; remaining digits from memory, recomputed",
        note="tests the dimensional form Tm = E/(R ln[a^2 rho Q Z E/(Tm^2 k delta R)]); public thermal-safety data",
    ),
)
