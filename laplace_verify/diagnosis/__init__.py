"""Where to look first: what the failing cases share, how they fail and where their errors sit."""

from laplace_verify.diagnosis.suspects import Suspect, diagnose

__all__ = ["Suspect", "diagnose"]
