"""Closed forms of conductors, windings and bars whose resistivity rises straight with temperature, at 40 digits.

Uniform field, u = ρ/ρ₀: a slab's equation u″ = −c/u with c = α E²/(k ρ₀) multiplied by u′ integrates to u′² = 2c ln(u_c/u), and once
more to an error function; a cylinder's is a power series in r². Equal density and bars: the equation is linear, with the
constants of sinh and cosh (of sin and cos where their argument is imaginary) or of Bessel's J₀. Derived here from Fourier's
and Ohm's laws.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import mpmath as mp

DIGITS = 40


@dataclass(frozen=True)
class Wire:
    """What a manufactured conductor needs and gives: heat and current are of half a slab's width, or of a radian of a cylinder."""

    face: Any  # temperature
    flux: Any
    E: Any
    mean: Any


def slab_of_uniform_field(a: Any, k: Any, rho0: Any, slope: Any, reference: Any, centre: Any, face: Any) -> Wire:
    """Half thickness a; E is found so that the centre and face temperatures are as given."""
    uc, uf = (1 + slope * (T - reference) for T in (centre, face))
    fall = mp.sqrt(mp.log(uc / uf))
    c = mp.pi / 2 * (uc * mp.erf(fall) / a) ** 2
    flux = k / slope * mp.sqrt(2 * c) * fall
    # u = u_c exp(−s²) lies u_c √(π/2c) erf(s) from the middle: its mean over the half is u_c² √(π/2c) erf(√2 s)/(√2 a).
    mean = uc**2 * mp.sqrt(mp.pi / (2 * c)) * mp.erf(mp.sqrt(2) * fall) / (mp.sqrt(2) * a)
    return Wire(face, flux, mp.sqrt(c * k * rho0 / slope), reference + (mean - 1) / slope)


def cylinder_of_uniform_field(R: Any, k: Any, rho0: Any, slope: Any, reference: Any, centre: Any, E: Any) -> Wire:
    """u (u″ + u′/r) = −c: in u = Σ uₙ r²ⁿ each power of r² gives the next coefficient."""
    c = slope * E**2 / (k * rho0)
    u = [1 + slope * (centre - reference)]
    for n in range(60):
        known = sum(u[j] * 4 * (n + 1 - j) ** 2 * u[n + 1 - j] for j in range(1, n + 1))
        u.append((-(c if n == 0 else 0) - known) / (4 * (n + 1) ** 2 * u[0]))
    uf = mp.fsum(x * R ** (2 * n) for n, x in enumerate(u))
    slope_at_face = mp.fsum(2 * n * x * R ** (2 * n - 1) for n, x in enumerate(u))
    assert abs(u[-1]) * R**120 < mp.mpf(10) ** -25
    mean = mp.fsum(x * R ** (2 * n) / (n + 1) for n, x in enumerate(u))
    return Wire(reference + (uf - 1) / slope, -k / slope * slope_at_face, E, reference + (mean - 1) / slope)


@dataclass(frozen=True)
class End:
    """A bar's end: held, or a film with its fluid (0 insulates); ``contact`` ohms there."""

    held: Any = None
    film: Any = 0
    fluid: Any = 0
    contact: Any = 0


@dataclass(frozen=True)
class ExactBar:
    """k A T″ + c ρ₀ J² A [1 + α (T − T₀)] − h P (T − T_f) = 0: T = T* + C cosh μx + D sinh μx, with μ² = (hP/A − c ρ₀ J² α)/k.

    Where the two balance, μ = 0, T is a parabola: no case here is one.
    """

    length: Any
    section: Any
    perimeter: Any
    k: Any
    rho0: Any
    slope: Any
    reference: Any
    ac: Any
    J: Any
    h: Any
    fluid: Any
    left: End
    right: End

    def __post_init__(self) -> None:
        q0, ratio = self.ac * self.rho0 * self.J**2, self.h * self.perimeter / self.section
        square = (ratio - q0 * self.slope) / self.k
        assert square != 0
        mu = mp.sqrt(mp.mpc(square))
        # T*: where heat made and lost are equal.
        even = (q0 * (1 - self.slope * self.reference) + ratio * self.fluid) / (self.k * square)
        rows, right = mp.matrix(2, 2), mp.matrix(2, 1)
        for i, (end, x, out) in enumerate(((self.left, mp.mpf(0), -1), (self.right, self.length, 1))):
            cosh, sinh = mp.cosh(mu * x), mp.sinh(mu * x)
            if end.held is not None:
                rows[i, 0], rows[i, 1], right[i] = cosh, sinh, end.held - even
            else:  # leaving: −k T′ outward, and the contact's I²R per section, is the film's
                freed = self.J**2 * self.section * end.contact
                for j, (value, change) in enumerate(((cosh, mu * sinh), (sinh, mu * cosh))):
                    rows[i, j] = end.film * value + out * self.k * change
                right[i] = freed - end.film * (even - end.fluid)
        C, D = mp.lu_solve(rows, right)
        for name, value in (("mu", mu), ("even", even), ("C", C), ("D", D)):
            object.__setattr__(self, name, value)

    mu: Any = None
    even: Any = None
    C: Any = None
    D: Any = None

    def T(self, x: Any) -> Any:
        return mp.re(self.even + self.C * mp.cosh(self.mu * x) + self.D * mp.sinh(self.mu * x))

    def rightward(self, x: Any) -> Any:
        """Watts through the section."""
        return -self.k * self.section * mp.re(self.mu * (self.C * mp.sinh(self.mu * x) + self.D * mp.cosh(self.mu * x)))

    @property
    def mean(self) -> Any:
        mu, L = self.mu, self.length
        return mp.re(self.even + (self.C * mp.sinh(mu * L) + self.D * (mp.cosh(mu * L) - 1)) / (mu * L))

    @property
    def peak(self) -> Any:
        """At an end, or where tanh μx = −D/C."""
        places = [mp.mpf(0), self.length]
        turn = mp.re(mp.atanh(-self.D / self.C) / self.mu) if abs(self.D) != abs(self.C) else mp.mpf(-1)
        period = mp.pi / abs(self.mu) if mp.re(self.mu) == 0 else None
        tops = [turn] if period is None else [turn + n * period for n in range(-2, 3)]
        places += [x for x in tops if 0 < x < self.length]
        return max(self.T(x) for x in places)

    @property
    def resistance(self) -> Any:
        return self.ac * self.rho0 * (1 + self.slope * (self.mean - self.reference)) * self.length / self.section

    @property
    def side(self) -> Any:
        return self.h * self.perimeter * self.length * (self.mean - self.fluid)


@dataclass(frozen=True)
class ExactCoil:
    """A solid cylinder wound with ρ rising: T = T* + C J₀(βr), β² = c ρ₀ J² α/k, cooled by a film; of radius R."""

    R: Any
    k: Any
    rho0: Any
    slope: Any
    reference: Any
    heat: Any  # ac ratio times fill factor
    J: Any
    film: Any
    fluid: Any

    @property
    def beta(self) -> Any:
        return mp.sqrt(self.heat * self.rho0 * self.J**2 * self.slope / self.k)

    @property
    def even(self) -> Any:
        return self.reference - 1 / self.slope

    @property
    def C(self) -> Any:
        x = self.beta * self.R
        return self.film * (self.fluid - self.even) / (self.film * mp.besselj(0, x) - self.k * self.beta * mp.besselj(1, x))

    def T(self, r: Any) -> Any:
        return self.even + self.C * mp.besselj(0, self.beta * r)

    @property
    def mean(self) -> Any:
        """Over the volume, which is the turns' own: each is as long as its radius."""
        x = self.beta * self.R
        return self.even + 2 * self.C * mp.besselj(1, x) / x
