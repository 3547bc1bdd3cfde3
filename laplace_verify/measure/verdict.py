"""The six outcomes of a study or a check."""

from __future__ import annotations

from enum import StrEnum

__all__ = ["Verdict"]


class Verdict(StrEnum):
    """What was concluded. A check that could not be made (NOT_RUN) is never counted as a pass.

    >>> Verdict("PASS").decided, Verdict.INCONCLUSIVE.decided
    (True, False)
    """

    PASS = "PASS"  # the observed order agrees with the expected one in every deciding norm
    FAIL = "FAIL"  # it falls short significantly, or an exact check fails
    INCONCLUSIVE = "INCONCLUSIVE"  # the reasons say what to do next
    ERROR = "ERROR"  # the solver broke
    NOT_APPLICABLE = "NOT_APPLICABLE"  # beyond the declared capabilities
    NOT_RUN = "NOT_RUN"  # left out by selection or budget

    @property
    def decided(self) -> bool:
        """True for PASS and FAIL."""
        return self in (Verdict.PASS, Verdict.FAIL)
