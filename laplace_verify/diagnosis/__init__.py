"""Where to look first: what the failing cases share, how they fail and where their errors sit."""

from laplace_verify.diagnosis.exercise import Outcome, chosen_faults, exercise
from laplace_verify.diagnosis.suspects import Suspect, diagnose

__all__ = ["Outcome", "Suspect", "chosen_faults", "diagnose", "exercise"]
