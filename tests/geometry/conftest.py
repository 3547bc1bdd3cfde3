"""One of every shape, away from the origin and out of proportion, so that mixed-up axes and radii show."""

import math

import pytest

from laplace_verify import geometry as geo

SQUARE = [(0.0, 0.0), (1.0, 0.0), (1.0, 1.0), (0.0, 1.0)]

SHAPES = {
    "interval": geo.Interval(-0.5, 1.75),
    "rectangle": geo.Rectangle((-1.0, 0.5), (2.0, 1.75)),
    "box": geo.Box((0.0, 1.0, -1.0), (2.0, 1.5, 2.0)),
    "disc": geo.Disc((1.0, -2.0), 1.5),
    "ellipse": geo.Ellipse((0.5, 1.0), (2.0, 0.75)),
    "annulus": geo.Annulus((1.0, 0.0), 0.75, 2.0),
    "eccentric annulus": geo.Annulus((1.0, 0.0), 0.75, 2.0, inner_centre=(1.5, -0.25)),
    "thin wedge": geo.Sector(2.0, 0.3),
    "three quarters": geo.Sector(1.5, 1.5 * math.pi),
    "slit disc": geo.Sector(1.5, 2.0 * math.pi),
    "half-disc": geo.HalfDisc((0.5, -1.0), 1.25),
    "half-annulus": geo.HalfAnnulus((0.5, -1.0), 0.5, 1.25),
    "parabolas": geo.ConfocalParabolas((0.5, -1.0), 0.4, 1.1),
    "split parabolas": geo.ConfocalParabolas((0.0, 0.5), 1.5, 0.25).split(right=[0.25, 0.6], left=[0.5]),
    "l-shape": geo.LShape(1.25),
    "triangle": geo.Polygon([(0.0, 0.0), (2.0, 0.5), (0.25, 1.0)]),
    "plate with holes": geo.Polygon(
        [(0.0, 0.0), (3.0, -0.5), (3.5, 2.0), (1.0, 1.25), (0.0, 2.0)],
        holes=[[(1.0, 0.25), (1.5, 0.25), (1.25, 0.75)], [(2.0, 0.5), (2.0, 1.0), (2.75, 1.0), (2.5, 0.25)]],
    ),
    "plate with slit": geo.Polygon(
        [(0.0, 0.0), (1.0, 0.0), (0.75, 0.5), (1.0, 0.0), (2.0, 0.0), (2.0, 1.0), (0.0, 1.5)]
    ),
    "ball": geo.Ball((1.0, -0.5, 0.25), 1.5),
    "spherical shell": geo.SphericalShell((1.0, -0.5, 0.25), 0.5, 1.25),
    "cylinder": geo.Cylinder(0.75, -0.5, 1.5),
    "cone section": geo.ConeSection(1.25, 0.5),
    "notched cone section": geo.ConeSection(0.75, 0.8 * math.pi),
    "prism": geo.Prism(geo.LShape(1.25), -0.5, 0.25),
    "crooked prism": geo.Prism(
        geo.Polygon(
            [(0.0, 0.0), (3.0, -0.5), (3.5, 2.0), (1.0, 1.25), (0.0, 2.0)],
            holes=[[(1.0, 0.25), (1.5, 0.25), (1.25, 0.75)]],
        ),
        1.0, 2.5,
    ),
    "notched cube": geo.NotchedCube(0.75),
    "split rectangle": geo.Rectangle((0.0, 0.0), (2.0, 1.0)).split(top=[0.4], left=[0.25, 0.5]),
    "split disc": geo.Disc((1.0, 0.0), 2.0).split(rim=[0.125, 0.5]),
    "split annulus": geo.Annulus((0.0, 0.0), 1.0, 2.0).split(inner=[0.25], outer=[0.75]),
    "split ellipse": geo.Ellipse((0.0, 0.0), (1.0, 3.0)).split(rim=[0.3, 0.6]),
}  # fmt: skip


@pytest.fixture(params=SHAPES.values(), ids=SHAPES.keys())
def shape(request):
    return request.param


@pytest.fixture(
    params=[s for s in SHAPES.values() if s.dim == 2], ids=[k for k, s in SHAPES.items() if s.dim == 2]
)
def plane_shape(request):
    return request.param


@pytest.fixture
def square():
    return SQUARE


@pytest.fixture
def every_shape():
    return SHAPES
