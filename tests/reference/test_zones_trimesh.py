"""Zone distances against trimesh's closest points on meshes of the same bodies."""

import numpy as np
import pytest
import trimesh

from ergo.mechanism.zones import Ball, Box, Cylinder, Zone

CASES = [
    # flat faces: the mesh is the body
    (Box((0.1, 0.2, 0.3), (0.2, 0.4, 0.6)), 1e-9),
    # 256 facets round a radius of 0.1 m lie up to r (1 - cos(pi / 256)) = 8e-6 m inside the cylinder
    (Cylinder((0.0, 0.0, 0.0), (0.0, 0.3, 0.4), 0.1), 1e-5),
    # 5120 facets on a radius of 0.15 m, edges up to 0.012 m: middles up to edge^2 / (6 r) = 1.6e-4 m inside
    (Ball((-0.1, 0.0, 0.2), 0.15), 2e-4),
]


def mesh(shape):
    if isinstance(shape, Box):
        place = trimesh.transformations.translation_matrix(shape.centre_m)
        return trimesh.creation.box(extents=shape.size_m, transform=place)
    if isinstance(shape, Cylinder):
        return trimesh.creation.cylinder(shape.radius_m, sections=256, segment=(shape.from_m, shape.to_m))
    ball = trimesh.creation.icosphere(subdivisions=4, radius=shape.radius_m)
    return ball.apply_translation(shape.centre_m)


def signed_distance(body, point):
    """Nearest of the closest points on all triangles; inside a convex mesh all faces look away."""
    near = trimesh.triangles.closest_point(body.triangles, np.tile(point, (len(body.triangles), 1)))
    distance = np.linalg.norm(near - point, axis=1).min()
    ahead = np.einsum("fk,fk->f", body.face_normals, point - body.triangles[:, 0])
    return distance if ahead.max() > 0.0 else -distance


@pytest.mark.parametrize(("shape", "atol"), CASES, ids=["box", "cylinder", "ball"])
def test_signed_distance(shape, atol):
    points = np.asarray(shape.row()[1:4]) + np.random.default_rng(11).uniform(-0.3, 0.3, (120, 3))
    body = mesh(shape)
    theirs = np.array([signed_distance(body, p) for p in points])
    assert (theirs < 0.0).any()
    np.testing.assert_allclose(Zone("z", "hazard", shape).distance_m(points), theirs, atol=atol)
