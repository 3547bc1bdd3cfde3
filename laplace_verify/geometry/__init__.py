"""Shapes, the pieces of their boundaries, outward normals, quadrature, sampling."""

from laplace_verify.geometry.base import Boundaries, Junction, Shape, Vertex
from laplace_verify.geometry.boundary import Boundary
from laplace_verify.geometry.cartesian import Box, Interval, Rectangle
from laplace_verify.geometry.cones import ConeSection
from laplace_verify.geometry.halves import HalfAnnulus, HalfDisc
from laplace_verify.geometry.pairs import PairShell
from laplace_verify.geometry.parabolas import ConfocalParabolas
from laplace_verify.geometry.planes import HalfSpace, Strip, within
from laplace_verify.geometry.polygons import LShape, Polygon
from laplace_verify.geometry.prisms import NotchedCube, Prism
from laplace_verify.geometry.round import Annulus, Disc, Ellipse, Sector
from laplace_verify.geometry.solids import Ball, Cylinder, SphericalShell
from laplace_verify.geometry.spec import shape_from_spec, shape_to_spec
from laplace_verify.geometry.spheroids import EllipticRing, Spheroid, SpheroidalShell
from laplace_verify.geometry.thin import RoundPlate, Screen
from laplace_verify.geometry.unbounded import Exterior
from laplace_verify.geometry.windows import Windowed, check_window, default_window

__all__ = [
    "Annulus",
    "Ball",
    "Boundaries",
    "Boundary",
    "Box",
    "ConeSection",
    "ConfocalParabolas",
    "Cylinder",
    "Disc",
    "Ellipse",
    "EllipticRing",
    "Exterior",
    "HalfAnnulus",
    "HalfDisc",
    "HalfSpace",
    "Interval",
    "Junction",
    "LShape",
    "NotchedCube",
    "PairShell",
    "Polygon",
    "Prism",
    "Rectangle",
    "RoundPlate",
    "Screen",
    "Sector",
    "Shape",
    "SphericalShell",
    "Spheroid",
    "SpheroidalShell",
    "Strip",
    "Vertex",
    "Windowed",
    "check_window",
    "default_window",
    "shape_from_spec",
    "shape_to_spec",
    "within",
]
