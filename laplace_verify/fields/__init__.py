"""Harmonic functions: values, gradients, conjugates, and as many digits as asked for."""

from laplace_verify.fields.affine import affine
from laplace_verify.fields.base import Field
from laplace_verify.fields.exponentials import exp_trig
from laplace_verify.fields.formula import Formula
from laplace_verify.fields.polynomials import polynomial
from laplace_verify.fields.singular import Cut, Enclosure, Singularity
from laplace_verify.fields.solids import solid
from laplace_verify.fields.sources import dipole, log_source, point_source
from laplace_verify.fields.specs import from_spec
from laplace_verify.fields.stretched import stretched
from laplace_verify.fields.user import field
from laplace_verify.fields.wedges import wedge

__all__ = [
    "Cut",
    "Enclosure",
    "Field",
    "Formula",
    "Singularity",
    "affine",
    "dipole",
    "exp_trig",
    "field",
    "from_spec",
    "log_source",
    "point_source",
    "polynomial",
    "solid",
    "stretched",
    "wedge",
]
