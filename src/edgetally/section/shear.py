"""Saint-Venant flexure from the boundary: shear areas by energy, and the centre of shear.

The definition of Gruttmann and Wagner (Computational Mechanics 27, 2001): σ_z grows along the beam by αx + βy, and the
shear stress obeys div τ = −(αx + βy), curl τ = ν/(1 + ν)·(βx − αy), no traction on the boundary. With c = ν/(2(1 + ν))

    τ = ∇ψ + h,  h = c(αy², βx²),  ψ = −(αx³ + βy³)/6 + φ,  ∇²φ = 0,
    ∂φ/∂n ds = dv = T_y dx − T_x dy,  T = (α(cy² − x²/2), β(cx² − y²/2)).

State a has α = 1, β = 0 and state b α = 0, β = 1; both are linear in c, so that one solution serves every ν.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from edgetally.curves.curve import Complexes, Floats
from edgetally.section.nodes import Nodes
from edgetally.section.torsion import conjugate, first_moments


@dataclass(frozen=True, eq=False)
class Flexure:
    """Conjugates of φ at the nodes for a at c⁰, a at c¹, b at c⁰, b at c¹.

    `rate` (N, 4) is dv/du. With voids v has the jump ∮dv around each; `single` and `single_rate` (N, 4) are v and dv/du
    less that of the sources Σ m_k ln|z − a_k|, and `sources` (N, 4) are these, to be added to the solution again.
    """

    rate: Floats
    single: Floats
    single_rate: Floats
    sources: Floats


@dataclass(frozen=True, eq=False)
class Shear:
    """Flexure of the region in its own frame at one Poisson's ratio.

    `compliance` (2, 2) is F_ij = ∫τⁱ·τʲ dA for unit forces along the axes, 1/F_xx and 1/F_yy the shear areas; `centre`
    the point through which forces pass that give no mean twist; `potential` (N, 2) is ψ and `gradient` (N, 2) is
    ∂φ/∂x − i∂φ/∂y at the nodes, for unit forces; `skew` is |F_xy − F_yx|, which should vanish.
    """

    compliance: Floats
    centre: complex
    potential: Floats
    gradient: Complexes
    skew: float


def flexure(nodes: Nodes, points: Complexes) -> Flexure:
    """Return the conjugates of the four parts, single-valued around the voids in which `points` (V,) lie.

    ∮dv around a void is the flux ∫(αx + βy) dA of the void, up to sign; m_k = −(1/2π)∮dv on a clockwise loop takes it
    out.
    """
    x, y, dx, dy = nodes.z.real, nodes.z.imag, nodes.slope.real, nodes.slope.imag
    rate = np.column_stack([0.5 * x * x * dy, -y * y * dy, -0.5 * y * y * dx, x * x * dx])
    single_rate, sources = rate, np.zeros_like(rate)
    if points.size:
        around = np.column_stack([nodes.around(rate[:, k] * nodes.weight) for k in range(4)])
        strength = -around[1:] / (2 * np.pi)
        apart = nodes.z[:, None] - points
        single_rate = rate - (nodes.slope[:, None] / apart).imag @ strength
        sources = np.log(np.abs(apart)) @ strength
    single = np.column_stack([nodes.antiderivative(single_rate[:, k]) for k in range(4)])
    return Flexure(rate, single, single_rate, sources)


def shear(nodes: Nodes, harmonic: Floats, rate: Floats, moments: Floats, poisson: float) -> Shear:
    """Derive the shear compliance from φ (N, 4) and dv/du (N, 4) of the four parts, at Poisson's ratio ν.

        F_ij = ∫ψⁱ(αʲx + βʲy) dA + ∮ψʲ hⁱ·n ds + ∫hⁱ·hʲ dA,   (α, β) = (1/I_y, 0) or (0, 1/I_x)

    by Green's identities; ∫φx dA as in `first_moments`. The moment of τ about the centroid is the force times the
    distance of the shear centre.
    """
    c = poisson / (2.0 * (1.0 + poisson))
    m = moments
    x, y, dx, dy = nodes.z.real, nodes.z.imag, nodes.dz.real, nodes.dz.imag
    phi = harmonic[:, [0, 2]] + c * harmonic[:, [1, 3]]
    rates = rate[:, [0, 2]] + c * rate[:, [1, 3]]
    flux = rates * nodes.weight[:, None]
    psi = phi - np.column_stack([x**3, y**3]) / 6.0
    through = c * np.column_stack([y * y * dy, -x * x * dx])
    energy = np.empty((2, 2))
    particular = -np.array([[m[4, 0], m[3, 1]], [m[1, 3], m[0, 4]]]) / 6.0
    for i in range(2):
        _, energy[i, 0], energy[i, 1] = first_moments(nodes, phi[:, i], flux[:, i])
    energy += particular + through.T @ psi + c * c * np.diag([m[0, 4], m[4, 0]])
    load = np.array([1.0 / m[2, 0], 1.0 / m[0, 2]])
    compliance = energy * np.outer(load, load)
    _, spin = conjugate(nodes)
    moment = (-(psi.T @ (spin * nodes.weight)) + c * np.array([-m[0, 3], m[3, 0]])) * load
    skew = abs(float(compliance[0, 1] - compliance[1, 0]))
    centre = complex(moment[1], -moment[0])
    # d(φ + iv)/dz along the boundary
    along = np.column_stack([nodes.rate(phi[:, k]) for k in range(2)])
    gradient = (along + 1j * rates) / nodes.slope[:, None] * load
    return Shear(0.5 * (compliance + compliance.T), centre, psi * load, gradient, skew)
