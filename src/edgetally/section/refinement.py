"""Refinement: panels from coarse to fine, until two resolutions agree."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from edgetally.curves.curve import Complexes
from edgetally.section.boundary import Mask
from edgetally.section.frame import Frame
from edgetally.section.panels import Panels, balanced, graded
from edgetally.section.resolution import Resolution, resolve

# Where to begin: decades of grading at corners and nodes on a panel. The coarser pairs are for outlines of very many
# curves.
BEGINNINGS = ((6.0, 6), (5.0, 4), (3.0, 3))
LOWEST = 4
# Panels whose coarseness exceeds this are cut in the first round. Each round asks for ten times less, or where unknowns
# are many for three times less: the next resolution has to be better than the last, but by no more than tells the
# error.
CUT = 6e-5
FALL = 0.1
SLOW = 0.3
MANY = 2000
# Where they are many, no round may multiply them by more than this.
LEAP = 1.9
# At joints, where the solution is not smooth and its coefficients fall slowly, this share of it is enough for a cut,
# and √(J/I_p) if that is more: the smaller J is against I_p, of which it is what is left, the more digits of ω it
# needs.
JOINT = 0.015
# Panels with this share of it get more nodes.
ENRICH = 0.1
MORE_NODES = 2
MOST_NODES = 16
# A round that adds fewer unknowns than this share would compare a resolution with itself.
GROWTH = 0.15
# Below this coarseness there is nothing but rounding.
ROUNDING = 1e-13
# Corners that turn right by more than this [rad] have unbounded stress, and are refined in every round.
SHARP = 1e-3


class TooManyUnknownsError(Exception):
    """Two resolutions of the coarsest kind already need more unknowns than allowed."""

    def __init__(self, needed: int) -> None:
        super().__init__(needed)
        self.needed = needed


def resolutions(frame: Frame, points: Complexes, poisson: float, limit: int) -> Iterator[Resolution]:
    """Yield ever finer resolutions, as long as their unknowns stay within `limit` and there is anything left to refine.

    Raises TooManyUnknownsError if not even the two coarsest do.
    """
    for depth, order in BEGINNINGS:
        panels = balanced(graded(frame.boundary, depth, order, min(LOWEST, order)), points)
        # the second resolution, which tells the error, has MORE_NODES more on each panel at most
        unknowns = int((panels.order + MORE_NODES).sum())
        if unknowns <= limit:
            break
    else:
        raise TooManyUnknownsError(unknowns)
    cut = CUT
    while True:
        resolution = resolve(frame, panels, points, poisson)
        yield resolution
        ratio = resolution.torsion.torsion_constant / float(frame.moments[0, 2] + frame.moments[2, 0])
        joint = float(np.sqrt(np.clip(ratio, JOINT**2, 1.0)))
        finer = _finer(resolution, cut, joint * cut, points)
        while MANY < finer.order.sum() > LEAP * panels.order.sum() and cut < 1.0:
            cut *= 3.0
            finer = _finer(resolution, cut, joint * cut, points)
        if int(finer.order.sum()) > limit:
            finer = panels.with_order(np.minimum(panels.order + MORE_NODES, MOST_NODES))
        if not panels.order.sum() < finer.order.sum() <= limit or cut < ROUNDING:
            return
        panels = finer
        cut *= FALL if int(panels.order.sum()) < MANY else SLOW


def _finer(resolution: Resolution, cut: float, joint_cut: float, points: Complexes) -> Panels:
    panels, coarseness = resolution.nodes.panels, resolution.coarseness
    enriched = np.minimum(panels.order + MORE_NODES, MOST_NODES)
    order = np.where(coarseness > ENRICH * cut, enriched, panels.order)
    starts, ends = panels.joint_ends
    at_joint = (coarseness > joint_cut) & (starts | ends)
    mask: Mask = (coarseness > cut) | at_joint | _at_sharp_corner(panels)
    finer = balanced(panels.with_order(order).refined(mask), points)
    if finer.order.sum() < (1.0 + GROWTH) * panels.order.sum():
        finer = balanced(panels.with_order(enriched).refined(mask), points)
    return finer


def _at_sharp_corner(panels: Panels) -> Mask:
    boundary = panels.boundary
    sharp = boundary.turn < -SHARP
    starts = np.empty_like(sharp)
    starts[boundary.following] = sharp
    marked: Mask = ((panels.low == 0.0) & starts[panels.curve]) | ((panels.high == 1.0) & sharp[panels.curve])
    return marked
