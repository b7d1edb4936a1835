"""The geometry back to CAD: DXF of path and side elevation, STL and GLB of swept hand and reach."""

import io
import json
import struct
from collections.abc import Iterator, Mapping
from contextlib import contextmanager
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ergo.datasets import library
from ergo.evaluation.results import Results
from ergo.pictures.linkage_lines import linkage_points
from ergo.pictures.machine_lines import key_positions, lever_points
from ergo.pictures.sheet import plain
from ergo.report.solids import plate, swept_ball

Array = NDArray[np.float64]
PLATE_MM = 50.0
FLOAT = 5126  # component type of glTF 2.0
MILLIMETRES = 4  # DXF header variable INSUNITS
LAYERS = {"HANDLE_PATH": 5, "LEVER": 7, "LINKAGE": 3, "BENCH": 8, "ZONES": 30, "REACH": 9, "NOTES": 8}
NOTE = "Millimetres, station coordinates: x right, y away from the operator, z up; origin on the floor below the bench edge."


def cad_files(results: Results) -> dict[str, bytes]:
    """Return every CAD file by name."""
    found = {"handle_path.dxf": path_dxf(results), "side_elevation.dxf": elevation_dxf(results)}
    solids = {"swept_hand": swept_hand(results), **reach_plates(results)}
    for name, faces in solids.items():
        found[f"{name}.stl"] = stl(faces, name)
    found["solids.glb"] = glb(solids)
    found["units.txt"] = (NOTE + " STL in millimetres; GLB in metres, y up, as that format requires.\n").encode()
    return found


def hand_radius_mm(results: Results) -> float:
    """Return the radius of the largest hand counted [mm]: the P95 fist with the glove that is worn."""
    tables = library()
    fists, body = tables.values("clearance_parameters"), tables.values("body_model_parameters")
    glove = body[f"glove_{results.study['operators']['glove']}_breadth_mm"] / 2.0
    return float(fists["fist_radius_men_mm"] + glove)


def swept_hand(results: Results) -> Array:
    """Return the volume that the largest hand sweeps over the stroke, as triangles (t, 3, 3) [mm]."""
    return swept_ball(results.stroke.handle_mm, hand_radius_mm(results))


def reach_plates(results: Results) -> dict[str, Array]:
    """Return a plate for each reach limit: the region the hand reaches in the plane of the working shoulder."""
    found = {}
    for name, rows in (results.details.get("reach_lines_mm") or {}).items():
        outline = np.asarray(rows, dtype=float).reshape(-1, 3)
        outline = outline[np.isfinite(outline).all(axis=1)]
        if len(outline) >= 3:
            found["reach_" + "".join(c if c.isalnum() else "_" for c in name.lower()).strip("_")] = plate(
                outline, PLATE_MM
            )
    return found


def stl(faces: Array, name: str) -> bytes:
    """Return triangles (t, 3, 3) [mm] as binary STL; the header states the units."""
    corners = np.asarray(faces, dtype=np.float32)
    normal = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
    length = np.linalg.norm(normal, axis=1)
    row = np.dtype([("normal", "<f4", 3), ("corners", "<f4", (3, 3)), ("attribute", "<u2")])
    rows = np.zeros(len(corners), dtype=row)
    rows["normal"] = normal / np.maximum(length, 1e-12)[:, None]
    rows["corners"] = corners
    head = f"{name}, units mm, station coordinates".encode("ascii", "replace")[:80].ljust(80)
    return head + struct.pack("<I", len(rows)) + rows.tobytes()


def glb(solids: Mapping[str, Array]) -> bytes:
    """Return solids as binary glTF 2.0: metres, y up, one named mesh each."""
    binary, views, accessors, meshes = b"", [], [], []
    for name, faces in solids.items():
        points = np.asarray(faces, dtype=float).reshape(-1, 3) * 1e-3
        turned = np.stack([points[:, 0], points[:, 2], -points[:, 1]], axis=1).astype("<f4")
        views.append({"buffer": 0, "byteOffset": len(binary), "byteLength": turned.nbytes})
        ends = {"min": [float(v) for v in turned.min(axis=0)], "max": [float(v) for v in turned.max(axis=0)]}
        accessors.append(
            {"bufferView": len(views) - 1, "componentType": FLOAT, "count": len(turned), "type": "VEC3", **ends}
        )
        meshes.append({"name": name, "primitives": [{"attributes": {"POSITION": len(accessors) - 1}}]})
        binary += turned.tobytes()
    scene: dict[str, Any] = {
        "asset": {"version": "2.0", "extras": {"units": "metres, y up; station x, z, -y"}},
        "scene": 0,
        "scenes": [{"nodes": list(range(len(meshes)))}],
        "nodes": [{"mesh": n, "name": m["name"]} for n, m in enumerate(meshes)],
        "meshes": meshes, "accessors": accessors, "bufferViews": views, "buffers": [{"byteLength": len(binary)}],
    }  # fmt: skip
    text = json.dumps(scene, sort_keys=True, separators=(",", ":")).encode()
    text += b" " * (-len(text) % 4)
    body = struct.pack("<II", len(text), 0x4E4F534A) + text + struct.pack("<II", len(binary), 0x004E4942) + binary
    return struct.pack("<III", 0x46546C67, 2, 12 + len(body)) + body


def path_dxf(results: Results) -> bytes:
    """Return handle path, lever, linkage, zones and reach lines as 3D DXF in station coordinates."""
    with _document() as doc:
        _draw_path(doc.modelspace(), results)
        return _written(doc)


def _draw_path(space: Any, results: Results) -> None:
    space.add_polyline3d(_tuples(results.stroke.handle_mm), dxfattribs={"layer": "HANDLE_PATH"})
    made = lever_points(results)
    for position in key_positions(results):
        if "pivot" in made:
            line = [made["pivot"], made["end"][position], made["grip"][position]]
            space.add_polyline3d(_tuples(line), dxfattribs={"layer": "LEVER"})
        chain = _chain(results, position)
        if len(chain) > 1:
            space.add_polyline3d(_tuples(chain), dxfattribs={"layer": "LINKAGE"})
    for zone in results.study.get("zones", ()):
        for line in _zone_wires(zone):
            space.add_polyline3d(_tuples(line), dxfattribs={"layer": "ZONES"})
    for rows in (results.details.get("reach_lines_mm") or {}).values():
        space.add_polyline3d(_tuples(rows), dxfattribs={"layer": "REACH"})
    _note(space, results, (0.0, -300.0, 0.0))


def elevation_dxf(results: Results) -> bytes:
    """Return the side elevation as flat DXF: X of the drawing is station y, Y of the drawing is station z."""
    with _document() as doc:
        _draw_elevation(doc.modelspace(), results)
        return _written(doc)


def _flat(points: Any) -> list[tuple[float, float]]:
    return [(float(p[1]), float(p[2])) for p in np.asarray(points, dtype=float).reshape(-1, 3)]


def _draw_elevation(space: Any, results: Results) -> None:
    space.add_lwpolyline(_flat(results.stroke.handle_mm), dxfattribs={"layer": "HANDLE_PATH"})
    made = lever_points(results)
    radius = results.study["grip"]["diameter_mm"] / 2.0
    for position in key_positions(results):
        space.add_circle(_flat(made["grip"][position])[0], radius, dxfattribs={"layer": "LEVER"})
        if "pivot" in made:
            space.add_lwpolyline(_flat([made["pivot"], made["end"][position]]), dxfattribs={"layer": "LEVER"})
        chain = _chain(results, position)
        if len(chain) > 1:
            space.add_lwpolyline(_flat(chain), dxfattribs={"layer": "LINKAGE"})
    bench = results.study["bench"]
    top, under = bench["surface_height_mm"], bench["surface_height_mm"] - bench["edge_thickness_mm"]
    far = max(600.0, float(np.max(results.stroke.handle_mm[:, 1])) + 100.0)
    space.add_lwpolyline([(far, top), (0.0, top), (0.0, under), (far, under)], dxfattribs={"layer": "BENCH"})
    space.add_lwpolyline([(bench["toe_space_mm"], under), (bench["toe_space_mm"], 0.0)], dxfattribs={"layer": "BENCH"})
    space.add_line((-900.0, 0.0), (far, 0.0), dxfattribs={"layer": "BENCH"})
    for zone in results.study.get("zones", ()):
        for line in _zone_wires(zone):
            space.add_lwpolyline(_flat(line), dxfattribs={"layer": "ZONES"})
    _note(space, results, (-900.0, -60.0, 0.0))


def _chain(results: Results, position: int) -> list[Array]:
    points = linkage_points(results)
    names = [name for name in ("arm_pin", "slide_pin", "rim") if name in points]
    return [points["pivot"], *(points[name][position] for name in names)] if names else []


def _zone_wires(zone: Mapping[str, Any]) -> list[Array]:
    """Closed wires of a zone: two faces and four edges of a box, end circles of a cylinder, great circles of a ball."""
    turn = np.linspace(0.0, 2.0 * np.pi, 49)
    if zone["shape"] == "box":
        half = np.array(zone["size_mm"], dtype=float) / 2.0
        square = np.array([(-1, -1), (1, -1), (1, 1), (-1, 1), (-1, -1)])
        faces = [np.column_stack([np.full(5, side), square]) * half for side in (-1, 1)]
        edges = [np.array([(-1, a, b), (1, a, b)]) * half for a, b in square[:4]]
        return [np.array(zone["centre_mm"], dtype=float) + wire for wire in (*faces, *edges)]
    if zone["shape"] == "ball":
        rings = [np.roll(np.column_stack([np.cos(turn), np.sin(turn), 0.0 * turn]), k, axis=1) for k in range(3)]
        return [np.array(zone["centre_mm"], dtype=float) + zone["radius_mm"] * ring for ring in rings]
    ends = np.array([zone["from_mm"], zone["to_mm"]], dtype=float)
    axis = ends[1] - ends[0]
    other = np.cross(axis, np.eye(3)[int(np.argmin(np.abs(axis)))])
    other /= np.linalg.norm(other)
    third = np.cross(axis / np.linalg.norm(axis), other)
    ring = zone["radius_mm"] * (np.cos(turn)[:, None] * other + np.sin(turn)[:, None] * third)
    sides = [np.array([ends[0] + ring[k], ends[1] + ring[k]]) for k in (0, 12, 24, 36)]
    return [ends[0] + ring, ends[1] + ring, *sides]


def _tuples(points: Any) -> list[tuple[float, float, float]]:
    return [(float(x), float(y), float(z)) for x, y, z in np.asarray(points, dtype=float).reshape(-1, 3)]


@contextmanager
def _document() -> Iterator[Any]:
    """Give a new document in millimetres, with the time and the name of its making left out."""
    import ezdxf

    option = ezdxf.options  # type: ignore[attr-defined]
    before = option.write_fixed_meta_data_for_testing
    option.write_fixed_meta_data_for_testing = True
    try:
        doc = ezdxf.new("R2010", setup=False)  # type: ignore[attr-defined]
        doc.header["$INSUNITS"] = MILLIMETRES
        doc.header["$MEASUREMENT"] = 1
        for name, colour in LAYERS.items():
            doc.layers.add(name, color=colour)
        yield doc
    finally:
        option.write_fixed_meta_data_for_testing = before


def _note(space: Any, results: Results, at: tuple[float, float, float]) -> None:
    title = plain(results.study["study"]["title"], 120)
    for row, text in enumerate((title, NOTE)):
        place = (at[0], at[1] - 30.0 * row, at[2])
        space.add_text(text, height=15.0, dxfattribs={"layer": "NOTES", "insert": place})


def _written(doc: Any) -> bytes:
    out = io.StringIO()
    doc.write(out)
    return out.getvalue().encode("utf-8")
