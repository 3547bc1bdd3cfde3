"""The stored corner fits: current, complete, refused when damaged; some are made again, byte for byte."""

import json

import pytest

from laplace_verify.cases import corner_fits
from laplace_verify.cases.catalogue import catalogue
from laplace_verify.cases.corner_fits import FITS, fitted, make_fit, stale_fits
from laplace_verify.errors import RecordError
from laplace_verify.references.quantity_digits import with_quantity_digits


def test_no_file_is_stale():
    assert stale_fits() == []


@pytest.mark.parametrize("name", FITS)
def test_error_is_bounded_by_the_maximum_principle(name):
    field = fitted(name)
    assert field.basis == "maximum-principle bound"
    assert 0 < field.fit_error < 1e-36
    assert field.most_digits >= 36


@pytest.mark.parametrize("name", FITS)
def test_fluxes_of_the_case_have_the_digits_of_the_fit(name):
    case = with_quantity_digits(catalogue[name])
    (flux,) = [q for q in case.quantities.values() if q.kind == "flux"]
    assert flux.digits.basis == "maximum-principle bound"
    # the bound of a flux is some hundred times that of the values; 1e-50 is the rounding to fifty digits
    assert float(flux.digits.radius) < 2000 * fitted(name).fit_error + 3e-50
    assert abs(float(flux.digits.value) - flux.value) <= flux.radius


@pytest.mark.slow
@pytest.mark.parametrize("name", ["plate-hot-end-condition-change", "cracked-bar", "l-basin-two-levels"])
def test_made_again_the_file_has_the_same_bytes(name, tmp_path):
    lines = []
    again = make_fit(name, tmp_path, lines.append)
    assert again.read_bytes() == (corner_fits.FOLDER / f"{name}.json").read_bytes()
    assert lines == [f"corner fit {name}: |error| <= {fitted(name).radius} (maximum-principle bound)"]


def test_damaged_missing_and_old_files_are_refused(tmp_path, monkeypatch):
    content = json.loads((corner_fits.FOLDER / "cracked-bar.json").read_text())
    monkeypatch.setattr(corner_fits, "FOLDER", tmp_path)
    path = tmp_path / "cracked-bar.json"
    assert set(stale_fits()) == set(FITS)
    with pytest.raises(
        RecordError, match=r"fitted/cracked-bar.json is missing, damaged or belongs to an older"
    ):
        fitted("cracked-bar")
    path.write_text(json.dumps(content)[:500])
    with pytest.raises(RecordError, match="missing, damaged"):
        fitted("cracked-bar")
    path.write_text(json.dumps(content | {"definition": {**content["definition"], "digits": 3}}))
    with pytest.raises(RecordError, match="older definition"):
        fitted("cracked-bar")
    path.write_text(json.dumps(content | {"field": {**content["field"], "radius": "small"}}))
    with pytest.raises(RecordError, match=r"fitted/cracked-bar.json: field: radius"):
        fitted("cracked-bar")
    path.write_text(json.dumps(content | {"field": {"kind": "polynomial", "degree": 2}}))
    with pytest.raises(RecordError, match="no sum of corner powers"):
        fitted("cracked-bar")


def test_unknown_fit_names_the_nearest():
    with pytest.raises(RecordError, match="cracked-bar"):
        fitted("cracked-barr")
