"""Write marram-mesh.stl: the sphere-cone of marram.toml, closed with its base, as triangles in mm.

Run from anywhere: `python trajectories/build_meshes.py`. The same numbers give the same bytes.
"""

from __future__ import annotations

from pathlib import Path

import numpy as np
import trimesh

NOSE, HALF_ANGLE, BASE = 270.0, np.radians(55.0), 450.0  # mm, rad, mm: as in marram.toml
ON_NOSE, ON_CONE, ON_BASE, AROUND = 12, 8, 4, 72  # steps along each stretch and around the axis


def outline() -> np.ndarray:
    """Return radius and distance behind the nose tip (k, 2) [mm], from the middle of the base to the tip."""
    turn = np.linspace(0.0, np.pi / 2 - HALF_ANGLE, ON_NOSE + 1)
    nose = np.stack([NOSE * np.sin(turn), NOSE * (1.0 - np.cos(turn))], axis=1)
    joint = nose[-1]
    end = joint[1] + (BASE - joint[0]) / np.tan(HALF_ANGLE)
    cone = joint + np.linspace(0.0, 1.0, ON_CONE + 1)[1:, None] * (np.array([BASE, end]) - joint)
    base = np.array([BASE, end]) + np.linspace(0.0, 1.0, ON_BASE + 1)[1:, None] * np.array([-BASE, 0.0])
    return np.concatenate([nose, cone, base])[::-1]


def capsule() -> trimesh.Trimesh:
    """Return the body in body axes: x forward, y right, z down, the tip of the nose at the origin."""
    points = outline()
    body = trimesh.creation.revolve(points, sections=AROUND)  # about z, which points backwards
    turned = body.vertices[:, [2, 0, 1]] * np.array([-1.0, 1.0, 1.0])
    mesh = trimesh.Trimesh(turned, body.faces, process=False)
    if mesh.volume < 0.0:
        mesh.invert()
    return mesh


def main() -> None:
    """Write the file beside this script."""
    path = Path(__file__).parent / "marram-mesh.stl"
    mesh = capsule()
    path.write_bytes(mesh.export(file_type="stl"))
    print(f"{path.name}: {len(mesh.faces)} triangles, {path.stat().st_size} bytes")


if __name__ == "__main__":
    main()
