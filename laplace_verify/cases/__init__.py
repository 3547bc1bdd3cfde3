"""The named cases: exact problems from the invented tidal-pool works at Marram Bay."""

from laplace_verify.cases.catalogue import Catalogue, catalogue
from laplace_verify.cases.describe import describe
from laplace_verify.cases.regenerate import regenerate_cases

__all__ = ["Catalogue", "catalogue", "describe", "regenerate_cases"]
