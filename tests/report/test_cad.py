"""DXF, STL and GLB, read back by ezdxf and trimesh."""

import io
import math

import numpy as np
import pytest

from ergo.report.cad import cad_files, elevation_dxf, glb, hand_radius_mm, path_dxf, stl, swept_hand
from ergo.report.solids import RING, plate, swept_ball

ezdxf = pytest.importorskip("ezdxf")
trimesh = pytest.importorskip("trimesh")

# A circle drawn as a polygon of RING corners has this share of its area; the half balls lose a little more.
POLYGON_SHARE = math.sin(2.0 * math.pi / RING) / (2.0 * math.pi / RING)


def solid(faces, name="solid"):
    return trimesh.load(io.BytesIO(stl(faces, name)), file_type="stl")


def read_dxf(content):
    doc = ezdxf.read(io.StringIO(content.decode()))
    assert not doc.audit().errors
    return doc


def test_the_path_of_the_dxf_is_the_path_of_the_results(short):
    doc = read_dxf(path_dxf(short))
    lines = doc.modelspace().query('POLYLINE[layer=="HANDLE_PATH"]')
    points = np.array([tuple(v.dxf.location) for v in lines[0].vertices])
    assert np.array_equal(points, short.stroke.handle_mm)
    assert doc.header["$INSUNITS"] == 4  # millimetres


def test_the_elevation_is_the_path_seen_from_the_side(short):
    doc = read_dxf(elevation_dxf(short))
    line = doc.modelspace().query('LWPOLYLINE[layer=="HANDLE_PATH"]')[0]
    assert np.array_equal(np.array(line.get_points("xy")), short.stroke.handle_mm[:, 1:])
    bench = doc.modelspace().query('LWPOLYLINE[layer=="BENCH"]')[0]
    assert {y for _, y in bench.get_points("xy")} == {900.0, 855.0}


def test_the_dxf_comes_out_the_same_twice_and_leaves_no_trace(short):
    assert path_dxf(short) == path_dxf(short)
    assert not ezdxf.options.write_fixed_meta_data_for_testing


def test_a_ball_swept_along_a_line_is_a_capsule():
    mesh = solid(swept_ball([[0, 0, 0], [50, 0, 0], [200, 0, 0]], 30.0))
    exact = math.pi * 30.0**2 * 200.0 + 4.0 / 3.0 * math.pi * 30.0**3
    assert mesh.is_watertight
    assert mesh.is_winding_consistent
    # A polygon of RING sides lies inside its circle, and rings of CAP steps inside the half balls.
    assert POLYGON_SHARE * exact * 0.99 <= mesh.volume <= exact


def test_a_ball_swept_along_an_arc_keeps_pappus():
    radius, turn = 300.0, np.linspace(0.0, 1.2, 241)
    path = np.stack([0.0 * turn, radius * np.cos(turn), radius * np.sin(turn)], axis=1)
    mesh = solid(swept_ball(path, 45.0))
    exact = math.pi * 45.0**2 * radius * 1.2 + 4.0 / 3.0 * math.pi * 45.0**3
    assert mesh.is_watertight
    assert mesh.volume == pytest.approx(exact, rel=0.006)


def test_a_plate_has_the_area_of_its_outline_times_its_thickness():
    # An L of 100 x 60 less 70 x 40: area 3200, reflex corner included.
    corners = [(0, 0), (100, 0), (100, 20), (30, 20), (30, 60), (0, 60)]
    outline = [(7.0, y, z) for y, z in corners]
    for turned in (outline, outline[::-1]):
        mesh = solid(plate(turned, 50.0))
        assert mesh.is_watertight
        assert mesh.volume == pytest.approx(3200.0 * 50.0, rel=1e-6)


def test_the_swept_hand_is_watertight_and_round_the_path(short):
    mesh = solid(swept_hand(short))
    radius = hand_radius_mm(short)
    assert mesh.is_watertight
    assert mesh.bounds[0, 0] == pytest.approx(120.0 - radius, abs=0.1)
    assert mesh.bounds[1, 0] == pytest.approx(120.0 + radius, abs=0.1)


def test_a_glove_makes_the_hand_larger(factory, short):
    bare = hand_radius_mm(short)
    # Heavy glove: 20 mm on the breadth of the hand, half on each side.
    assert hand_radius_mm(factory.made(operators__glove="heavy")) == pytest.approx(bare + 10.0)


def test_every_stl_is_watertight_and_names_its_units(short):
    files = cad_files(short)
    for name in (n for n in files if n.endswith(".stl")):
        assert b"units mm" in files[name][:80]
        mesh = trimesh.load(io.BytesIO(files[name]), file_type="stl")
        assert mesh.is_watertight, name
        assert mesh.volume > 0.0, name


def test_glb_is_in_metres_with_y_up():
    box = plate([(0, 0, 0), (0, 200, 0), (0, 200, 100), (0, 0, 100)], 50.0)
    scene = trimesh.load(io.BytesIO(glb({"box": box})), file_type="glb")
    # Station 50 right, 200 away, 100 up is 0.05, 0.1, 0.2 in right, up, toward.
    assert scene.extents == pytest.approx([0.05, 0.1, 0.2])
