"""The named cases: exact problems from the invented tidal-pool works at Marram Bay."""

from laplace_verify.cases.catalogue import Catalogue, catalogue

__all__ = ["Catalogue", "catalogue"]
