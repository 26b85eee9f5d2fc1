"""The steady section: the profile in which conduction carries a given distribution of heat to the losses."""

from dataclasses import dataclass

import numpy as np
from scipy.linalg.lapack import dgtsv

from thermal.conduction.assemble import Section
from thermal.errors import NoConvergence
from thermal.interfaces import Array, BoundaryLoss

ITERATIONS_AT_MOST = 60
CLOSE = 1e-9
"""Last change of temperature over the temperature itself."""

CURVED = ("outer", "bore")
"""Faces of one cell, with a surface temperature of their own."""


@dataclass(frozen=True)
class SteadyProfile:
    """A section at rest.

    T : (n,) [K] ; surfaces : outer (and bore) -> [K] ; losses : (face, loss) -> [W] ; share : of the given heat that
    keeps the section at rest: what is lost over what the given heat brings.
    """

    T: Array
    surfaces: dict[str, float]
    losses: dict[tuple[str, str], float]
    share: float


def steady_profile(
    section: Section,
    losses: dict[str, tuple[BoundaryLoss, ...]],
    heat: Array,
    T_mean: float,
    start: Array,
    T_seen: float,
) -> SteadyProfile:
    """The profile of a given mean temperature that rests with heat of a given distribution.

    div(k grad T) + share heat = 0 on the finite volumes of a run, its surface temperatures and losses included; the
    mean fixes the one unknown share. Newton's rule, the conductivity and the slope of the flux through the surface
    cell taken over from the last iterate.

    heat : (n,) [W/m3] ; T_mean : [K] over the volume ; start : (n,) [K] first guess ; T_seen : [K] the least that
    surfaces which keep their oxide have been through.

    Raises
    ------
    NoConvergence : nothing is lost (no share can be found), or no profile after 60 iterations.
    """
    volume = section.mesh.volume
    weight = volume / volume.sum()
    brought = heat * volume
    T = start + (T_mean - float(weight @ start))
    share = 0.0
    per_kelvin = np.ones_like(T)
    for _ in range(ITERATIONS_AT_MOST):
        k = section.conductivity(T)
        conductance = section.conductances(k)
        flow = conductance * (T[:-1] - T[1:])
        net = share * brought
        net[:-1] -= flow
        net[1:] += flow
        diagonal = np.zeros_like(T)
        surfaces: dict[str, float] = {}
        lost: dict[tuple[str, str], float] = {}
        for name, acting in losses.items():
            if name in CURVED:
                cell = -1 if name == "outer" else 0
                peak = max(T_seen, float(T[cell]))
                face = section.surface_state(name, acting, T, k, flow, per_kelvin, peak)
                surfaces[name] = float(face.T_surface)
                net[cell] -= sum(face.loss)
                diagonal[cell] += sum(face.slope)
            else:
                face = section.ends_state(name, acting, T, per_kelvin, np.maximum(T, T_seen))
                for watts, slope in zip(face.loss, face.slope, strict=True):
                    net -= watts
                    diagonal += slope
            for loss, watts in zip(acting, face.loss, strict=True):
                lost[name, loss.name] = float(np.sum(watts))
        if not diagonal.any():
            raise NoConvergence("the workpiece loses no heat here, so no temperature is a state of rest")
        diagonal[:-1] += conductance
        diagonal[1:] += conductance
        *_, solved, info = dgtsv(-conductance, diagonal, -conductance, np.stack([net, brought], axis=1))
        if info != 0:
            raise NoConvergence("the steady heat equations of the section could not be solved (singular matrix)")
        settling, driven = solved.T
        more = (T_mean - float(weight @ (T + settling))) / float(weight @ driven)
        change = settling + more * driven
        T = T + change
        share += more
        if float(np.max(np.abs(change))) < CLOSE * T_mean:
            return SteadyProfile(T, surfaces, lost, share)
    raise NoConvergence(f"no steady profile found at a mean of {T_mean:.0f} K")
