"""Everything a run needs, as parts; made by build(), consumed by march()."""

from dataclasses import dataclass

from materials.material import Material
from thermal.conduction.assemble import Section
from thermal.geometry.sampling import Sampler
from thermal.interfaces import BoundaryLoss, HeatSource, Supply
from thermal.schedule import Place, Stage

Losses = dict[Place, dict[str, tuple[BoundaryLoss, ...]]]


@dataclass(frozen=True)
class Setup:
    """A run ready to march.

    Parameters
    ----------
    title : of the case ; material : of the workpiece.
    section : mesh, enthalpy table and conductivity ; sampler : reads temperatures from it.
    source, supply : heat source and what drives it ; has_coil : electrical answers exist.
    share : this workpiece's part of every coil and supply quantity (below 1 in a touching row).
    losses : place -> face -> losses, all faces of the mesh.
    stages : in order ; depths : reading name -> depth [m] under the outer surface.
    T_initial : [K] ; T_end : [K] the hottest the run may get (liquidus, or the end of the data).
    gas : key of the gas around the workpiece ; mass : [kg] ; tolerance : [K] per step.
    assumptions, notes : for the reader of the result.
    """

    title: str
    material: Material
    section: Section
    sampler: Sampler
    source: HeatSource
    supply: Supply
    has_coil: bool
    share: float
    losses: Losses
    stages: tuple[Stage, ...]
    depths: dict[str, float]
    T_initial: float
    T_end: float
    gas: str
    mass: float
    frequency: float
    tolerance: float
    assumptions: tuple[str, ...]
    notes: tuple[str, ...]
