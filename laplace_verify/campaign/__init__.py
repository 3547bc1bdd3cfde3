"""Many studies and checks of one solver, gathered in one record."""

from laplace_verify.campaign.record import Record, record_from_json, record_to_json

__all__ = ["Record", "record_from_json", "record_to_json"]
