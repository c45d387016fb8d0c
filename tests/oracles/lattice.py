"""Equivalent radius from the lattice Green's function, by quadrature.

No closed form of the equivalent radius enters here; the only input is the five-point operator on an
infinite lattice.

**Stretch.** x' = x (ky/kx)**(1/4), y' = y (kx/ky)**(1/4) makes the rock isotropic, k = sqrt(kx ky).
The lattice then has spacings a = dx (ky/kx)**(1/4) and b = dy (kx/ky)**(1/4), and, with k h/mu = 1,
links of transmissibility Tx = b/a and Ty = a/b, so that Tx Ty = 1. A wellbore of radius rw becomes
an ellipse, for the far field a circle of radius rw' = rw ((ky/kx)**(1/4) + (kx/ky)**(1/4))/2.

**Kernel.** Let one unit per time leave at node (0, 0): sum over links T (u - u_neighbour) = delta.
The difference A(m, n) = u(0, 0) - u(m, n) is a double Fourier integral. That over the angle
belonging to n is elementary: with s = sin(t/2), w = sqrt(1 + Tx**2 s**2), c = 4 Tx s**2 + 2 Ty,
D = sqrt(c**2 - 4 Ty**2) = 4 s w and l = 2 Ty/(c + D) < 1,

    A(m, n) = (1/pi) int_0^pi (1 - l**|n| cos(m t))/D dt.

**Far field.** On the axis l**0 = 1, and 2/D = 1/(2 s) + (1/(2 s))(1/w - 1). The first term gives
int_0^pi (1 - cos(m t))/(2 s) dt = ln(4 m) + gamma + o(1), by comparison with 1/t:
int_0^pi (1 - cos(m t))/t dt = ln(m pi) + gamma + o(1), int_0^pi (1/(2 s) - 1/t) dt = ln(4/pi). In
the second the cosine averages out. Hence, r = m a,

    2 pi A(m, 0) = ln r + C + o(1),    C = ln(4/a) + gamma + I,
    I = int_0^pi (1/(2 s)) (1/w - 1) dt = -int_0^pi Tx**2 s/(2 w (1 + w)) dt,

the same constant in every direction, because the lattice's far field is that of the isotropic
plane. Fix the potential's constant so that u -> -(1/2 pi) ln r far away: the source's own node then
has u(0, 0) = C/(2 pi), that is -(1/2 pi) ln r0' with r0' = exp(-C): the isolated well's radius.

**Closed sides.** The well block's centre stands half a block from each closed side; the well stands
at a distance of its own from it, 0 to be on it. The mirror makes the half plane (or quadrant) a
whole one. On the lattice the images of the block are its neighbours (-1, 0), (0, -1), (-1, -1), so

    u_block = N C/(2 pi) - sum over images A(image),    N = 2 or 4 sources, itself counted.

In the continuum the line source has images at twice its distances from the sides. The pressure on
the wellbore is the mean of ln(distance): ln rw' for the well and for every image that coincides
with it, and, the mean of a harmonic function being its value at the centre, ln(distance to the
image) for the others,

    p_well = -(1/2 pi) (M ln rw' + sum over the other N - M images ln(distance)),    M = 1, 2 or 4.

(The last mean is exact for a circle outside the others; an ellipse errs by (rw/distance)**2.) Both
far fields are -(N/2 pi) ln r about the same mirror point, with no dipole, so the constants agree.
Only a fraction 1/M of the circle flows: sector = 1/M, and the definition
p_well - u_block = ln(r0'/rw')/(2 pi sector) gives

    ln r0' = sector (sum over images 2 pi A(image) - N C - sum over the other images ln(distance)).

Last, r0 = 2 r0'/((ky/kx)**(1/4) + (kx/ky)**(1/4)), to be used with the true rw.
"""

from itertools import product
from typing import Final, NamedTuple

from mpmath import mp, mpf  # type: ignore[import-untyped]

DIGITS: Final = 30


class Radius(NamedTuple):
    """Equivalent radius for use with the true rw, and the fraction of the circle that flows."""

    r0: mpf
    sector: mpf


def _break_points(tx: mpf) -> list[mpf]:
    corners = (mpf(10) ** exponent / tx for exponent in range(-2, 3))
    return [mpf(0), *(corner for corner in corners if corner < 3), mp.pi]


def potential_kernel(m: int, n: int, *, a: float, b: float) -> mpf:
    """A(m, n) = u(0, 0) - u(m, n) of a unit source at node (0, 0), spacings a and b, kh/mu = 1."""
    with mp.workdps(DIGITS):
        tx, ty = mpf(b) / mpf(a), mpf(a) / mpf(b)

        def integrand(t: mpf) -> mpf:
            s = mp.sin(t / 2)
            d = 4 * s * mp.sqrt(1 + (tx * s) ** 2)
            c = 4 * tx * s**2 + 2 * ty
            decay = 2 * ty / (c + d)
            missing = (4 * tx * s**2 + d) / (c + d) * sum(decay**j for j in range(abs(n)))
            return (missing + decay ** abs(n) * 2 * mp.sin(m * t / 2) ** 2) / d

        # One interval per half wave of cos(m t) keeps the rule converging for large m.
        waves = [mp.pi * j / abs(m) for j in range(1, abs(m))]
        return mp.quad(integrand, sorted([*_break_points(tx), *waves])) / mp.pi


def far_field_constant(*, a: float, b: float) -> mpf:
    """C in 2 pi A(m, n) = ln r + C + o(1)."""
    with mp.workdps(DIGITS):
        tx = mpf(b) / mpf(a)

        def integrand(t: mpf) -> mpf:
            s = mp.sin(t / 2)
            w = mp.sqrt(1 + (tx * s) ** 2)
            return -(tx**2) * s / (2 * w * (1 + w))

        return mp.log(4 / mpf(a)) + mp.euler + mp.quad(integrand, _break_points(tx))


def equivalent_radius(
    *,
    dx: float,
    dy: float,
    kx: float = 1.0,
    ky: float = 1.0,
    side_x: float | None = None,
    side_y: float | None = None,
) -> Radius:
    """Equivalent radius of a well in an infinite lattice, a half plane or a quadrant.

    side_x, side_y: distance from the well to the closed side normal to x, or to y, that bounds its
    block: 0 on the side, dx/2 in the block's centre; None where there is no such side.
    """
    with mp.workdps(DIGITS):
        along, across = (mpf(ky) / kx) ** mpf("0.25"), (mpf(kx) / ky) ** mpf("0.25")
        a, b = mpf(dx) * along, mpf(dy) * across
        mirrors_x = (0,) if side_x is None else (0, 1)
        mirrors_y = (0,) if side_y is None else (0, 1)
        images = [image for image in product(mirrors_x, mirrors_y) if any(image)]
        distances = [
            mp.hypot(2 * i * along * (side_x or 0), 2 * j * across * (side_y or 0))
            for i, j in images
        ]
        apart = [distance for distance in distances if distance > 0]
        sources = 1 + len(images)
        sector = 1 / mpf(sources - len(apart))
        kernels = sum((potential_kernel(i, j, a=a, b=b) for i, j in images), start=mpf(0))
        log_r0 = sector * (
            2 * mp.pi * kernels
            - sources * far_field_constant(a=a, b=b)
            - sum((mp.log(distance) for distance in apart), start=mpf(0))
        )
        return Radius(2 * mp.exp(log_r0) / (along + across), sector)
