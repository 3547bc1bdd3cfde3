"""Harmonic functions: values, gradients, conjugates, and as many digits as asked for."""

from laplace_verify.fields.affine import affine
from laplace_verify.fields.base import Field
from laplace_verify.fields.singular import Cut, Enclosure, Singularity
from laplace_verify.fields.specs import from_spec

__all__ = [
    "Cut",
    "Enclosure",
    "Field",
    "Singularity",
    "affine",
    "from_spec",
]
