"""Cylinder, tube and plate as meshes of one cell along the length."""

from dataclasses import replace

import numpy as np
import numpy.typing as npt

from thermal.geometry.grading import refine
from thermal.geometry.mesh import Face, Mesh

Array = npt.NDArray[np.float64]


def cylinder(edges: Array, length: float) -> Mesh:
    """Solid bar (edges[0] == 0) or tube (edges[0] > 0).

    Parameters
    ----------
    edges : (n + 1,) [m] radii of the cell faces, rising; length : [m].
    """
    ring = np.pi * np.diff(edges**2)
    areas = 2.0 * np.pi * edges * length
    faces = _radial_faces(edges, areas, ends=2.0 * ring)
    if edges[0] > 0.0:
        first = np.array([0], dtype=np.intp)
        faces["bore"] = Face(first, areas[:1], np.array([0.5 * (edges[1] - edges[0])]))
    return _radial_mesh("cylindrical", edges, length, 0.0, ring * length, areas, faces)


def plate(edges: Array, width: float, length: float) -> Mesh:
    """Plate heated from both broad faces; the mid-plane is a plane of symmetry.

    Parameters
    ----------
    edges : (n + 1,) [m] distances of the cell faces from the mid-plane, edges[0] == 0; width, length : [m].
        Both halves are counted in volumes and areas; "edges" are the two narrow faces along the length.
    """
    layer = 2.0 * np.diff(edges)
    areas = np.full(edges.shape, 2.0 * width * length)
    faces = _radial_faces(edges, areas, ends=2.0 * layer * width)
    faces["edges"] = replace(faces["ends"], area=2.0 * layer * length)
    return _radial_mesh("planar", edges, length, width, layer * width * length, areas, faces)


def cut(mesh: Mesh, parts: int) -> Mesh:
    """The same workpiece with every cell cut into equal parts."""
    edges = refine(mesh.edges, parts)
    return plate(edges, mesh.width, mesh.length) if mesh.kind == "planar" else cylinder(edges, mesh.length)


def _radial_faces(edges: Array, areas: Array, ends: Array) -> dict[str, Face]:
    n = edges.size - 1
    last = np.array([n - 1], dtype=np.intp)
    # In one dimension every ring shows its own temperature at the end faces: no gap.
    return {
        "outer": Face(last, areas[-1:], np.array([0.5 * (edges[-1] - edges[-2])])),
        "ends": Face(np.arange(n, dtype=np.intp), ends, np.zeros(n)),
    }


def _radial_mesh(
    kind: str, edges: Array, length: float, width: float, volume: Array, areas: Array, faces: dict[str, Face]
) -> Mesh:
    n = volume.size
    half = 0.5 * np.diff(edges)
    return Mesh(
        kind="planar" if kind == "planar" else "cylindrical",
        r=edges[:-1] + half,
        edges=edges,
        length=length,
        width=width,
        volume=volume,
        left=np.arange(n - 1, dtype=np.intp),
        right=np.arange(1, n, dtype=np.intp),
        area=areas[1:-1],
        gap_left=half[:-1],
        gap_right=half[1:],
        faces=faces,
    )
