"""Shapes, the pieces of their boundaries, outward normals, quadrature, sampling."""

from laplace_verify.geometry.base import Boundaries, Junction, Shape
from laplace_verify.geometry.boundary import Boundary
from laplace_verify.geometry.cartesian import Box, Interval, Rectangle
from laplace_verify.geometry.halves import HalfAnnulus, HalfDisc
from laplace_verify.geometry.polygons import LShape, Polygon
from laplace_verify.geometry.round import Annulus, Disc, Ellipse, Sector
from laplace_verify.geometry.solids import Ball, Cylinder, SphericalShell
from laplace_verify.geometry.spec import shape_from_spec, shape_to_spec

__all__ = [
    "Annulus",
    "Ball",
    "Boundaries",
    "Boundary",
    "Box",
    "Cylinder",
    "Disc",
    "Ellipse",
    "HalfAnnulus",
    "HalfDisc",
    "Interval",
    "Junction",
    "LShape",
    "Polygon",
    "Rectangle",
    "Sector",
    "Shape",
    "SphericalShell",
    "shape_from_spec",
    "shape_to_spec",
]
