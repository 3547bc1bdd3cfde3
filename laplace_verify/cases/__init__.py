"""The named cases: exact problems from the invented tidal-pool works at Marram Bay."""

from laplace_verify.cases.catalogue import Catalogue, catalogue
from laplace_verify.cases.describe import describe
from laplace_verify.cases.regenerate import case_file, regenerate_cases
from laplace_verify.cases.saving import save_case

__all__ = ["Catalogue", "case_file", "catalogue", "describe", "regenerate_cases", "save_case"]
