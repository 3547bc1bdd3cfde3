"""The files in the repository: a dozen values or more a case, close ones too, in fifty digits."""

import json
from fractions import Fraction
from pathlib import Path

import pytest

from laplace_verify.cases.corner_fits import FITS, fitted

FOLDER = Path(__file__).resolve().parents[2] / "reference_cases"
FILES = {path.stem: path for path in sorted(FOLDER.glob("*.json")) if path.stem != "PROVENANCE"}
LEAST = 12
BESIDE = ("inside", "1e-3 of the extent", "1e-6 of the extent")
RELATIVE = Fraction(1, 10**47)  # of a value; a flat value 0 has radius 0 or that of a sum that cancels
ABSOLUTE = Fraction(1, 10**60)


def lacks(content, known=None):
    """What the values of a file lack."""
    stored = content["stored"]
    if len(stored) < LEAST:
        yield f"only {len(stored)} points"
    for words in BESIDE:
        if not any(entry["place"].startswith(words) for entry in stored):
            yield f"no point {words}"
    for entry in stored:
        size = abs(Fraction(entry["value"]))
        # a fit has `known` digits behind the point, the last of which is rounded
        room = RELATIVE * size if known is None else (1 + size) / 10 ** (min(known, 48) - 1)
        if Fraction(entry["radius"]) > room + ABSOLUTE:
            yield f"value at {entry['point']} to {entry['radius']} only"
        steep = max(abs(Fraction(slope)) for slope in entry["gradient"])
        # the gradient of a fit is known worse the closer to the boundary: by its own rule
        if known is None and Fraction(entry["gradient_radius"]) > 10 * RELATIVE * steep + ABSOLUTE:
            yield f"gradient at {entry['point']} to {entry['gradient_radius']} only"


def content_of(id_):
    return json.loads(FILES[id_].read_text())


@pytest.mark.parametrize("id_", FILES)
def test_every_file_has_its_values_in_fifty_digits(id_):
    content = content_of(id_)
    if content["exact"] is None:
        assert not content["stored"]  # ill-posed: nothing to store
        return
    assert not list(lacks(content, fitted(id_).most_digits if id_ in FITS else None))


def test_a_lack_is_seen():
    """The twin: a point too few, none close, a digit too few."""
    content = content_of("plate-wave")
    fewer = content | {"stored": content["stored"][:11]}
    assert "only 11 points" in list(lacks(fewer))
    far = [entry for entry in content["stored"] if not entry["place"].startswith("1e-6")]
    assert "no point 1e-6 of the extent" in list(lacks(content | {"stored": far}))
    for name in ("radius", "gradient_radius"):
        vague = [content["stored"][0] | {name: "1e-40"}, *content["stored"][1:]]
        assert any("to 1e-40 only" in lack for lack in lacks(content | {"stored": vague}))
