"""Many studies and checks of one solver, gathered in one record."""

from laplace_verify.campaign.gathering import merged_record, partial_record
from laplace_verify.campaign.record import Record, record_from_json, record_to_json
from laplace_verify.campaign.verify import chosen_cases, verify

__all__ = [
    "Record",
    "chosen_cases",
    "merged_record",
    "partial_record",
    "record_from_json",
    "record_to_json",
    "verify",
]
