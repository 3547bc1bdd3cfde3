"""Shapes, the pieces of their boundaries, outward normals, quadrature, sampling."""

from laplace_verify.geometry.base import Boundaries, Junction, Shape
from laplace_verify.geometry.boundary import Boundary
from laplace_verify.geometry.cartesian import Box, Interval, Rectangle
from laplace_verify.geometry.polygons import LShape, Polygon
from laplace_verify.geometry.round import Annulus, Disc, Ellipse, Sector

__all__ = [
    "Annulus",
    "Boundaries",
    "Boundary",
    "Box",
    "Disc",
    "Ellipse",
    "Interval",
    "Junction",
    "LShape",
    "Polygon",
    "Rectangle",
    "Sector",
    "Shape",
]
