"""Draws the block off screen, in a process of its own: the graphics library can crash without an exception.

Run as `python -m blockload.report.draw_child DATA.npz FOLDER`; writes PNG files and drawn.json into FOLDER.
"""

from __future__ import annotations

import json
import sys
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any

import numpy as np
import pyvista
from matplotlib.image import imsave
from vtkmodules.vtkRenderingCore import vtkWindowToImageFilter

from ..arrays import Floats, Ints
from .colours import USE_LIMIT, stress_colours, use_colours

# Camera directions from the block's middle, car axes.
VIEWS = {
    "front_left": (1.0, 1.15, 0.62),
    "rear_right": (-1.0, -1.15, 0.62),
    "below": (0.55, 0.9, -1.05),
}
OVERVIEW, CLOSE = (1000, 700), (640, 480)
GROUND_COLOUR = "white"


@contextmanager
def _plotter(size: tuple[int, int]) -> Iterator[Any]:
    """A plotter that is always closed: an open one keeps its memory."""
    plotter = pyvista.Plotter(off_screen=True, window_size=size, lighting="none")
    try:
        plotter.set_background(GROUND_COLOUR)
        plotter.add_light(pyvista.Light(light_type="headlight"))
        plotter.enable_anti_aliasing("ssaa")
        plotter.add_axes(xlabel="x", ylabel="y", zlabel="z", line_width=3, viewport=(0, 0, 0.16, 0.22))
        plotter.enable_parallel_projection()
        yield plotter
    finally:
        plotter.close()


def _table(colours: Any, most: float) -> Any:
    table = pyvista.LookupTable(n_values=len(colours), scalar_range=(0.0, most))
    table.values = np.column_stack([colours, np.full(len(colours), 255)]).astype(np.uint8)
    return table


def _mesh(points: Floats, triangles: Ints, **fields: Floats) -> Any:
    mesh = pyvista.PolyData(np.asarray(points), np.column_stack([np.full(len(triangles), 3), triangles]))
    for name, values in fields.items():
        mesh.point_data[name] = values
    return mesh


def _paint(plotter: Any, mesh: Any, scalars: str, table: Any) -> None:
    plotter.add_mesh(
        mesh,
        scalars=scalars,
        cmap=table,
        show_scalar_bar=False,
        smooth_shading=True,
        split_sharp_edges=True,
        feature_angle=35.0,
        ambient=0.68,
        diffuse=0.34,
        specular=0.0,
        interpolate_before_map=True,
    )
    edges = _sharp(mesh)
    if edges.n_points:
        plotter.add_mesh(edges, color="#30383c", line_width=2.0)
    if scalars == "use":
        edge = mesh.contour([1.0], scalars="use")
        if edge.n_points:
            plotter.add_mesh(edge, color="black", line_width=3.0)


def _sharp(mesh: Any) -> Any:
    return mesh.extract_feature_edges(feature_angle=35.0, manifold_edges=False, non_manifold_edges=False)


def _look(plotter: Any, at: Floats, direction: Floats, half_height: float) -> None:
    direction = np.asarray(direction, dtype=float) / np.linalg.norm(direction)
    up = (0.0, 0.0, 1.0) if abs(direction[2]) < 0.97 else (1.0, 0.0, 0.0)
    plotter.camera_position = [tuple(np.asarray(at) + 3.0 * direction), tuple(at), up]
    plotter.camera.parallel_scale = half_height
    plotter.renderer.reset_camera_clipping_range()
    plotter.render_window.Render()


def overview(data: dict[str, Any], folder: Path) -> dict[str, Any]:
    """Draw the deformed block from three sides by margin, and from one by stress."""
    moved = data["points"] + float(data["deformation"]) * data["displacement"]
    mesh = _mesh(moved, data["triangles"], use=data["use"], stress=data["stress"])
    outline = _sharp(_mesh(data["points"], data["triangles"]))
    both = np.concatenate([data["points"], moved])
    centre = (both.max(axis=0) + both.min(axis=0)) / 2
    stress = _table(stress_colours(), float(data["stress_range"]))
    jobs = (("use", _table(use_colours(), USE_LIMIT), VIEWS), ("stress", stress, {"front_left": VIEWS["front_left"]}))
    drawn: dict[str, Any] = {}
    for scalars, table, views in jobs:
        with _plotter(OVERVIEW) as plotter:
            _paint(plotter, mesh, scalars, table)
            plotter.add_mesh(outline, color="#8b9499", line_width=1.0, opacity=0.8)
            for name, direction in views.items():
                height = _half_height(both - centre, np.array(direction), OVERVIEW)
                _look(plotter, centre, np.array(direction), height)
                key = f"{'margin' if scalars == 'use' else 'stress'}_{name}"
                _save(plotter, folder / f"{key}.png")
                drawn[key] = {}
    return drawn


def _half_height(points: Floats, direction: Floats, size: tuple[int, int]) -> float:
    """Half the picture's height in metres so that all points fit, with room around them."""
    d = direction / np.linalg.norm(direction)
    right = np.cross((0.0, 0.0, 1.0), d)
    right /= np.linalg.norm(right)
    up = np.cross(d, right)
    wide, high = np.abs(points @ right).max(), np.abs(points @ up).max()
    return float(1.06 * max(high, wide * size[1] / size[0]))


def hotspots(data: dict[str, Any], folder: Path) -> dict[str, Any]:
    """Draw one close-up per hotspot, from a direction in which the spot itself can be seen."""
    mesh = _mesh(data["points"], data["triangles"], use=data["use"])
    normals = mesh.compute_normals(cell_normals=False, split_vertices=False, consistent_normals=False)["Normals"]
    drawn: dict[str, Any] = {}
    hidden = []
    with _plotter(CLOSE) as plotter:
        _paint(plotter, mesh, "use", _table(use_colours(), USE_LIMIT))
        for k, spot in enumerate(data["hotspots"]):
            node = int(np.linalg.norm(data["points"] - spot, axis=1).argmin())
            reach, path = _reach(data, node), folder / f"hotspot_{k}.png"
            for direction in _clear_directions(mesh, spot, np.asarray(normals[node])):
                if _aim(plotter, spot, direction, reach):
                    _save(plotter, path, ring=True)
                    drawn[path.stem] = {"visible": True, "cut": False}
                    break
            else:
                hidden.append((path, spot, np.asarray(normals[node], dtype=float), reach))
    for path, spot, normal, reach in hidden:
        opened = mesh.clip(normal=normal, origin=spot + 0.006 * normal)
        with _plotter(CLOSE) as plotter:
            _paint(plotter, opened, "use", _table(use_colours(), USE_LIMIT))
            visible = _aim(plotter, spot, normal, reach)
            _save(plotter, path, ring=visible)
            drawn[path.stem] = {"visible": visible, "cut": True}
    return drawn


def _aim(plotter: Any, spot: Floats, direction: Floats, reach: float) -> bool:
    """Point the camera at the spot; whether the spot is what is seen there."""
    _look(plotter, spot, direction, reach)
    return _seen(plotter, spot)


def _save(plotter: Any, path: Path, *, ring: bool = False) -> None:
    """Write what was drawn last; a ring in the middle of the picture marks the spot the camera looks at."""
    grab = vtkWindowToImageFilter()
    grab.SetInput(plotter.render_window)
    grab.ShouldRerenderOff()
    grab.ReadFrontBufferOff()
    grab.Update()
    image = pyvista.wrap(grab.GetOutput())
    wide, high, _ = image.dimensions
    pixels = np.asarray(image.point_data["ImageScalars"]).reshape(high, wide, -1)[::-1, :, :3].copy()
    if ring:
        y, x = np.mgrid[:high, :wide]
        away = np.abs(np.hypot(x - (wide - 1) / 2, y - (high - 1) / 2) - 0.085 * high)
        pixels = (pixels * np.clip(away - 1.0, 0.0, 1.0)[..., None]).astype(np.uint8)
    imsave(path, pixels)


def _reach(data: dict[str, Any], node: int) -> float:
    """Half the height of a close-up [m]: a few times the size of the hot region."""
    away = np.linalg.norm(data["points"] - data["points"][node], axis=1)
    hot = (data["use"] > 0.8 * data["use"][node]) & (away < 0.06)
    return float(np.clip(4.0 * away[hot].max(initial=0.0), 0.04, 0.12))


def _clear_directions(mesh: Any, spot: Floats, normal: Floats, most: int = 8) -> list[Floats]:
    """Return directions from which no wall hides the spot, those nearest the normal and a little above it first."""
    count = 200
    turn = np.pi * (3.0 - np.sqrt(5.0)) * np.arange(count)
    z = 1.0 - (2.0 * np.arange(count) + 1.0) / count
    around = np.column_stack([np.sqrt(1 - z * z) * np.cos(turn), np.sqrt(1 - z * z) * np.sin(turn), z])
    worth = around @ normal + 0.25 * around[:, 2] - 0.5 * np.abs(around[:, 2])
    clear: list[Floats] = []
    for k in np.argsort(-worth):
        if around[k] @ normal < 0.15 or len(clear) == most:
            continue
        hits, _ = mesh.ray_trace(spot + 0.0008 * around[k], spot + 3.0 * around[k], first_point=True)
        if len(hits) == 0:
            clear.append(around[k])
    return clear


def _seen(plotter: Any, spot: Floats) -> bool:
    """Whether the surface drawn at the spot's pixel is the spot, by the depth of that pixel."""
    renderer = plotter.renderer
    renderer.SetWorldPoint(*spot, 1.0)
    renderer.WorldToDisplay()
    x, y, _ = renderer.GetDisplayPoint()
    depth = plotter.render_window.GetZbufferDataAtPoint(int(x), int(y))
    renderer.SetDisplayPoint(int(x), int(y), depth)
    renderer.DisplayToWorld()
    world = np.array(renderer.GetWorldPoint()[:3]) / renderer.GetWorldPoint()[3]
    return bool(np.linalg.norm(world - spot) < 0.006)


def main(arguments: list[str]) -> int:
    """Draw what the data file holds; returns the exit code."""
    source, folder = Path(arguments[0]), Path(arguments[1])
    with np.load(source, allow_pickle=False) as stored:
        data = {name: stored[name] for name in stored.files}
    drawn = overview(data, folder)
    if len(data["hotspots"]):
        drawn |= hotspots(data, folder)
    (folder / "drawn.json").write_text(json.dumps(drawn), encoding="utf-8")
    return 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
