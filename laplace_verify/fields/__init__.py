"""Harmonic functions: values, gradients, conjugates, and as many digits as asked for."""

from laplace_verify.fields.affine import affine
from laplace_verify.fields.along_z import along_z
from laplace_verify.fields.base import Field
from laplace_verify.fields.box_faces import box_faces
from laplace_verify.fields.box_modes import box_mode
from laplace_verify.fields.checkerboards import checkerboard, checkerboard_ratio
from laplace_verify.fields.cones import cone, cone_exponent
from laplace_verify.fields.corner_powers import CornerPowers, corner_powers
from laplace_verify.fields.corner_series import CornerSeries, Expansion, LocalSum, PolynomialPart
from laplace_verify.fields.cylinder_faces import cylinder_faces
from laplace_verify.fields.disc_arcs import arcs
from laplace_verify.fields.edge_waves import edge_wave
from laplace_verify.fields.edges import Edge, Line, Ring
from laplace_verify.fields.exponentials import exp_trig
from laplace_verify.fields.formula import Formula
from laplace_verify.fields.half_edges import half_edge
from laplace_verify.fields.hemispheres import hemispheres
from laplace_verify.fields.joukowski import elliptic_multipole, flow_past
from laplace_verify.fields.kelvin import Inverted as Inverted  # its kind must be known to readers of files
from laplace_verify.fields.meridian import axisymmetric
from laplace_verify.fields.patches_loaded import loaded_disc, loaded_rectangle
from laplace_verify.fields.piecewise import parabola, piecewise, ramp, step, tent
from laplace_verify.fields.piecewise_regions import by_region
from laplace_verify.fields.plate_convection import rectangle_convection
from laplace_verify.fields.plate_exponential import exponential
from laplace_verify.fields.plate_modes import coefficient_rule, modes
from laplace_verify.fields.plate_sides import rectangle_sides
from laplace_verify.fields.poisson_disc import fourier, poisson_disc
from laplace_verify.fields.polynomials import polynomial
from laplace_verify.fields.prism import prism
from laplace_verify.fields.radial import radial
from laplace_verify.fields.rectangle_series import rectangle_series
from laplace_verify.fields.seepage import dam_seepage, form_factor
from laplace_verify.fields.sheets import Fan, Sheet
from laplace_verify.fields.singular import Cut, Enclosure, Singularity
from laplace_verify.fields.solids import solid
from laplace_verify.fields.sources import dipole, log_source, point_source
from laplace_verify.fields.specs import from_spec
from laplace_verify.fields.sphere_pairs import sphere_pair
from laplace_verify.fields.spheroidal import spheroid_data, spheroid_flow, spheroid_potential
from laplace_verify.fields.square_outside import flow_past_square, square_multipole
from laplace_verify.fields.stretched import stretched
from laplace_verify.fields.user import field
from laplace_verify.fields.wedges import wedge
from laplace_verify.fields.zonal import ball_zonal, shell_zonal

__all__ = [
    "CornerPowers",
    "CornerSeries",
    "Cut",
    "Edge",
    "Enclosure",
    "Expansion",
    "Fan",
    "Field",
    "Formula",
    "Line",
    "LocalSum",
    "PolynomialPart",
    "Ring",
    "Sheet",
    "Singularity",
    "affine",
    "along_z",
    "arcs",
    "axisymmetric",
    "ball_zonal",
    "box_faces",
    "box_mode",
    "by_region",
    "checkerboard",
    "checkerboard_ratio",
    "coefficient_rule",
    "cone",
    "cone_exponent",
    "corner_powers",
    "cylinder_faces",
    "dam_seepage",
    "dipole",
    "edge_wave",
    "elliptic_multipole",
    "exp_trig",
    "exponential",
    "field",
    "flow_past",
    "flow_past_square",
    "form_factor",
    "fourier",
    "from_spec",
    "half_edge",
    "hemispheres",
    "loaded_disc",
    "loaded_rectangle",
    "log_source",
    "modes",
    "parabola",
    "piecewise",
    "point_source",
    "poisson_disc",
    "polynomial",
    "prism",
    "radial",
    "ramp",
    "rectangle_convection",
    "rectangle_series",
    "rectangle_sides",
    "shell_zonal",
    "solid",
    "sphere_pair",
    "spheroid_data",
    "spheroid_flow",
    "spheroid_potential",
    "square_multipole",
    "step",
    "stretched",
    "tent",
    "wedge",
]
