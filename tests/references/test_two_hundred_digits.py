"""Every case gives 200 digits at its probes, a fit those that its bound leaves, and refuses more."""

import mpmath
import pytest

import laplace_verify as lv
from laplace_verify.references import probes_of, stored_values

IDS = [case.id for case in lv.catalogue.select(ill_posed=False)]
MOST = 200


@pytest.mark.long
@pytest.mark.parametrize("id_", IDS)
def test_digits_go_on_where_the_stored_ones_end(id_):
    case = lv.catalogue[id_]
    most = min(MOST, case.exact.most_digits)
    probes = probes_of(case)
    for probe in (probes[0], probes[-1]):  # inside, and a millionth of the extent from the boundary
        stored = stored_values(case, [probe])[0]
        value, gradient = case.exact.at(probe.point, most), case.exact.gradient_at(probe.point, most)
        fewer = case.exact.at(probe.point, most - 15)
        with mpmath.workdps(most + 30):
            room = abs(value) * mpmath.mpf(10) ** (15 - most) + mpmath.mpf(10) ** -(most + 30)
            assert abs(value - fewer) <= room
            assert abs(value - mpmath.mpf(stored.value)) <= mpmath.mpf(stored.radius)
            for slope, text in zip(gradient, stored.gradient, strict=True):
                assert abs(slope - mpmath.mpf(text)) <= mpmath.mpf(stored.gradient_radius)


@pytest.mark.parametrize("id_", ["cracked-bar", "t-plate-smooth-data"])
def test_a_fit_refuses_digits_that_it_does_not_know(id_):
    case = lv.catalogue[id_]
    point = probes_of(case)[0].point
    known = case.exact.most_digits
    assert known < 60
    case.exact.at(point, known)
    with pytest.raises(lv.FieldError, match=f"leaves {known}"):
        case.exact.at(point, known + 1)
