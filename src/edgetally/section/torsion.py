"""Saint-Venant torsion from the boundary values of the warping function: J, Trefftz's shear centre, C_w.

The warping function ω about the centroid: ∇²ω = 0, ∂ω/∂n = y n_x − x n_y on every boundary. Its conjugate is ½(x² + y²)
on each loop, up to a constant per void.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from edgetally.curves.curve import Complexes, Floats
from edgetally.section.cauchy import integrals
from edgetally.section.nodes import Nodes


@dataclass(frozen=True, eq=False)
class Torsion:
    """Torsion of the region in its own frame (centroid at the origin, principal axes, A = 1).

    `omega` (N,): ω about the shear centre with mean 0 over the area, at the nodes; `warping_about_centroid` (N,) the ω
    of the equation; `leak` the largest part of Cauchy's formula in the voids that should vanish and does not.
    """

    torsion_constant: float
    warping_constant: float
    shear_centre: complex
    omega: Floats
    warping_about_centroid: Floats
    leak: float


def conjugate(nodes: Nodes) -> tuple[Floats, Floats]:
    """Return v = ½|z|² and dv/du at the nodes."""
    z = nodes.z
    return 0.5 * (z.real**2 + z.imag**2), z.real * nodes.slope.real + z.imag * nodes.slope.imag


def first_moments(nodes: Nodes, values: Floats, flux: Floats) -> tuple[float, float, float]:
    """Return ∫φ dA, ∫xφ dA, ∫yφ dA of a harmonic φ from its boundary values (N,) and ∂φ/∂n ds (N,).

    Green's second identity ∫φ∇²P dA = ∮(φ ∂P/∂n − P ∂φ/∂n) ds with P = r²/4, x r²/8, y r²/8.
    """
    x, y, dx, dy = nodes.z.real, nodes.z.imag, nodes.dz.real, nodes.dz.imag
    square = x * x + y * y
    zeroth = values @ (0.5 * (x * dy - y * dx)) - (0.25 * square) @ flux
    cross = 0.25 * x * y
    along_x = values @ ((3 * x * x + y * y) / 8 * dy - cross * dx) - (x * square / 8) @ flux
    along_y = values @ (cross * dy - (x * x + 3 * y * y) / 8 * dx) - (y * square / 8) @ flux
    return float(zeroth), float(along_x), float(along_y)


def torsion(nodes: Nodes, omega: Floats, moments: Floats, points: Complexes) -> Torsion:
    """Derive the constants of torsion from ω (N,) about the centroid; `points` (V,) lie inside the voids.

    In the frame, whose axes are principal:

        J = I_p − ∮ω (x dx + y dy)
        x_s = −∫yω dA / I_x,  y_s = ∫xω dA / I_y      (Trefftz 1935)
        C_w = ∫ω_s² dA,  ω_s = ω − y_s x + x_s y − mean
    """
    _, rate = conjugate(nodes)
    flux = rate * nodes.weight
    area, second_x, second_y = moments[0, 0], moments[0, 2], moments[2, 0]
    stiffness = float(second_x + second_y - omega @ flux)
    zeroth, along_x, along_y = first_moments(nodes, omega, flux)
    centre = complex(-along_y / second_x, along_x / second_y)
    about = omega - centre.imag * nodes.z.real + centre.real * nodes.z.imag - zeroth / area
    constant, leak = warping_constant(nodes, about, centre, points)
    return Torsion(stiffness, constant, centre, about, omega, leak)


def warping_constant(nodes: Nodes, omega: Floats, centre: complex, points: Complexes) -> tuple[float, float]:
    """Return C_w = ∫ω² dA for ω (N,) about the shear centre, from the boundary alone, and the leak of `Torsion`.

    f = ω + i·½|z − z_s|² is analytic once the constant of each void is added, and ω² = ½|f|² + ½Re f². By Stokes

        ∫f² dA = 1/(2i) ∮ conj(z) f² dz,    ∫|f|² dA = 1/(2i) ∮ f G dz,  ∂G/∂conj(z) = conj(f).

    Where ∮f dz = 0 around every void G is the conjugate of the antiderivative F. Else the residues r_k are split off at
    points a_k in the voids: f = F′ + Σ r_k/(z − a_k) and G = conj(F) + Σ conj(r_k)·2 ln|z − a_k|. The constants of f
    and F on each void follow from Cauchy's formula, ∮f/(ζ − a_k) dζ = 0.
    """
    z, dz = nodes.z, nodes.dz
    away = z - centre
    f: Complexes = omega + 0.5j * (away.real**2 + away.imag**2)
    leak = 0.0
    inside = nodes.loop - 1
    void = inside >= 0
    primitive_rate = f
    logarithms = np.zeros_like(f)
    if points.size:
        jump = integrals(nodes, f[:, None], points)[:, 0] / (2 * np.pi)
        leak = float(np.abs(jump.imag).max())
        f = f + np.where(void, -1j * jump.real[inside], 0.0)
        residue = 0.5j / np.pi * nodes.around(f * dz)[1:]
        apart = z[:, None] - points
        primitive_rate = f - (residue / apart).sum(axis=1)
        logarithms = (2.0 * np.log(np.abs(apart))) @ residue.conj()
    primitive: Complexes = nodes.antiderivative(primitive_rate * nodes.slope)
    if points.size:
        constant = integrals(nodes, primitive[:, None], points)[:, 0] / 2j / np.pi
        primitive = primitive + np.where(void, constant[inside], 0.0)
    absolute = (f * (primitive.conj() + logarithms)) @ dz / 2j
    square = (z.conj() * f * f) @ dz / 2j
    return float(0.5 * (absolute.real + square.real)), leak
