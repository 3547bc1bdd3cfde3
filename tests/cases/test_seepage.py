"""Cases of seepage: the dimensional twin of a dam, what is said of safety, who can solve them."""

import math

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.cases import seepage, seepage_drains
from laplace_verify.solvers.samples import five_point, p1_element

DAM, DEPTH, DROP, PERMEABILITY = "dam-on-permeable-layer", 12.0, 6.0, 2e-5


@pytest.fixture(scope="module")
def twin():
    """A layer of 12 m, 6 m of head, permeability 0.4 * 5e-5 m/s."""
    return lv.catalogue[DAM].scaled(length=(DEPTH, "m"), value=(DROP, "m"), conductivity=(5e-5, "m/s"))


def test_dam_in_metres_and_seconds(twin):
    # K(m')/(2 K(m)) = 0.346951773057291 at b = T: Harr 1962, ch. 5 (from memory; digits by quadrature)
    found = {name: (quantity.value, quantity.unit) for name, quantity in twin.quantities.items()}
    discharge, unit = found["discharge"]
    assert discharge == pytest.approx(PERMEABILITY * DROP * 0.346951773057291, rel=1e-13)
    assert unit == "m^2/s"
    assert found["uplift"] == (pytest.approx(DROP * DEPTH, rel=1e-14), "m^2")  # half the head on 2 x 12 m
    head, unit = found["pressure head under the upstream quarter of the base"]
    assert (head, unit) == (pytest.approx(float(twin.exact.at((-6, 0), 20)), rel=1e-14), "m")
    gradient, unit = found["exit gradient half a depth from the toe"]
    assert gradient == pytest.approx(-float(twin.exact.gradient_at((18, 0), 20)[1]), rel=1e-12)
    assert unit == ""
    shape = twin.problem.shape
    assert (shape.lower, shape.upper) == ((-24.0, -12.0), (24.0, 0.0))
    upstream = twin.problem.pieces["top-1"]
    assert (upstream.data(upstream.sample(5)[0]) == DROP).all()


@pytest.mark.slow
def test_twin_is_solved_at_the_rate_of_the_dam(twin):
    small, large = lv.study(five_point, lv.catalogue[DAM]), lv.study(five_point, twin)
    assert large.verdict is lv.Verdict.PASS, str(large)
    for norm in ("max", "L2"):
        assert large.orders[norm].observed == pytest.approx(small.orders[norm].observed, abs=1e-6)


@pytest.mark.parametrize("id_", [*seepage.family, *seepage_drains.family])
def test_words_of_caution_and_of_the_trade(id_):
    case = lv.catalogue[id_]
    assert "licensed practice" in case.statement
    assert "seepage" in case.tags
    kinds = {quantity.kind for quantity in case.quantities.values()}
    assert kinds & {"discharge", "flux"}
    assert p1_element.refuses(case.problem) is None


def test_pile_halves_the_way_and_the_uplift_behind_it():
    """A pile below the middle moves uplift from the downstream half of the base to the upstream half."""
    case = lv.catalogue["dam-with-sheet-pile"]
    back, front = (case.quantities[f"uplift {side}stream of the pile"].value for side in ("up", "down"))
    assert math.isclose(back + front, 1.0, rel_tol=1e-13)  # half the head on a base of 2
    flat = lv.fields.dam_seepage(2, "3/2")
    x = np.linspace(0.005, 0.995, 100)
    assert front < flat.value(np.column_stack([x, 0 * x])).mean()


def assert_head_is_elevation(case):
    surface = case.problem.pieces["free-surface"]
    points, _, _ = surface.sample(50)
    assert np.abs(case.exact.value(points) - points[:, 1]).max() <= 2e-15
    if surface.kind == "dirichlet":
        assert np.abs(surface.data(points) - points[:, 1]).max() <= 2e-15
    else:
        assert np.abs(surface.data(points)).max() <= 1e-15


@pytest.mark.parametrize("id_", list(seepage_drains.family))
def test_head_is_elevation_on_the_free_surface(id_):
    assert_head_is_elevation(lv.catalogue[id_])


def test_a_surface_that_is_not_free_is_seen():
    """The twin: the same water above a parabola a hundredth further out."""
    shape = lv.ConfocalParabolas((0.0, 0.0), 0.3636, 1.21).renamed(right="free-surface")
    case = lv.case(shape, {"axis-left": "neumann"}, lv.fields.wedge("1/2") * "6/5")
    with pytest.raises(AssertionError):
        assert_head_is_elevation(case)


def test_discharge_to_a_drain_in_metres():
    """Kozeny: q = k (sqrt(d^2 + h^2) - d), h the head at the distance d before the drain (from memory)."""
    twin = lv.catalogue["free-surface-without-flux"].scaled(
        length=(10, "m"), value=(10, "m"), conductivity=1e-5
    )
    height, distance = 14.4, 10 * (0.81 - 0.64)  # where the line of equal head meets the free surface
    found = twin.quantities["discharge"]
    assert found.value == pytest.approx(1.25e-5 * (math.hypot(distance, height) - distance), rel=1e-13)
