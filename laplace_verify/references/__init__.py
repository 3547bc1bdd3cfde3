"""Stored digits: reference values with an error radius and a stated basis, and their check."""

from laplace_verify.references.checking import CheckedValue, check_reference
from laplace_verify.references.confirmations import CONFIRMATIONS, Confirmation, confirmation_of
from laplace_verify.references.corner_fit import CornerFit, CornerTerms, SideData, fit_corners
from laplace_verify.references.folder import load_reference, reference_folder
from laplace_verify.references.probes import Probe, probes_of
from laplace_verify.references.stored import StoredReference, stored_values

__all__ = [
    "CONFIRMATIONS",
    "CheckedValue",
    "Confirmation",
    "CornerFit",
    "CornerTerms",
    "Probe",
    "SideData",
    "StoredReference",
    "check_reference",
    "confirmation_of",
    "fit_corners",
    "load_reference",
    "probes_of",
    "reference_folder",
    "stored_values",
]
