"""Stored digits: reference values with an error radius and a stated basis, and their check."""

from laplace_verify.references.checking import CheckedValue, check_reference
from laplace_verify.references.folder import load_reference, reference_folder
from laplace_verify.references.stored import StoredReference, stored_values

__all__ = [
    "CheckedValue",
    "StoredReference",
    "check_reference",
    "load_reference",
    "reference_folder",
    "stored_values",
]
