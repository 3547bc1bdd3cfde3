"""Discharge, exit gradient and uplift below dams and sheet piles, against values from outside the project."""

import math

import flint
import mpmath
import numpy as np
import pytest
import skfem
from skfem.helpers import dot, grad

import laplace_verify as lv

# Discharge over k h of a sheet pile of s/T in a layer of depth T, K(m')/(2 K(m)), m = sin(pi s/(2 T)):
# Harr 1962, Groundwater and Seepage, ch. 5; Polubarinova-Kochina 1962 (formula from memory). The digits come
# from mapping the half-strip and direct quadrature; at s = T/2 it is exactly 1/2.
PILES = {
    "0.1": 1.02980659100042,
    "0.25": 0.73460901581265,
    "0.5": 0.5,
    "0.75": 0.340317086529957,
    "0.9": 0.242764031794682,
}
# Exit gradient I s/h at the downstream face of the pile, (s/T) pi/(4 K(m) m): Harr 1962; Khosla, Bose and
# Taylor 1936, Publ. 12, Central Board of Irrigation (formulas from memory, digits as above); in infinitely
# deep ground 1/pi, printed as 0.318.
EXITS = {
    "0.1": 0.31765207164835,
    "0.25": 0.314085686287904,
    "0.5": 0.299535058683898,
    "0.75": 0.265648559044279,
}
# Discharge over k h under a flat base of width 2 b on a layer of depth T, m = tanh(pi b/(2 T)): Harr 1962;
# Polubarinova-Kochina 1962 (formula from memory, digits from direct quadrature).
DAMS = {
    "0.25": 0.742797138130837,
    "0.5": 0.533179556522553,
    "1": 0.346951773057291,
    "2": 0.204811352698359,
}


@pytest.mark.parametrize(("ratio", "published"), PILES.items())
def test_discharge_past_a_sheet_pile(ratio, published):
    assert math.isclose(lv.fields.form_factor(lv.fields.dam_seepage(0, 1, ratio)), published, rel_tol=1e-13)


@pytest.mark.parametrize(("ratio", "published"), EXITS.items())
def test_exit_gradient_beside_a_sheet_pile(ratio, published):
    pile = lv.fields.dam_seepage(0, 1, ratio)
    steepness = -pile.gradient([[0.0, 0.0]], side=[-1])[0, 1]
    assert math.isclose(float(ratio) * steepness, published, rel_tol=1e-13)


def test_exit_gradient_beside_a_sheet_pile_in_deep_ground():
    pile = lv.fields.dam_seepage(0, 1000, 1)
    steepness = -pile.gradient([[0.0, 0.0]], side=[-1])[0, 1]
    assert round(steepness, 3) == 0.318
    assert abs(steepness - 1 / math.pi) < 1e-6  # the square of 1/1000


@pytest.mark.parametrize(("half", "published"), DAMS.items())
def test_discharge_under_a_flat_base(half, published):
    base = f"{2 * float(half)}"
    assert math.isclose(lv.fields.form_factor(lv.fields.dam_seepage(base, 1)), published, rel_tol=1e-13)


@pytest.mark.parametrize("form", [(2, 1, 0), (0, 1, "1/4"), (3, 1, "1/2"), (60, 1, 0)])
def test_form_factor_by_ball_arithmetic(form):
    """K(m')/(2 K(m)), m = cos t sqrt(tanh^2 B + tan^2 t) (Harr 1962, ch. 5, from memory), by python-flint."""
    base, depth, pile = (float(eval_fraction(v)) for v in form)
    with flint.ctx.workprec(400):
        unit = flint.arb.pi() / (2 * flint.arb(depth))
        b, t = unit * flint.arb(base) / 2, unit * flint.arb(pile)
        m = t.cos() ** 2 * (b.tanh() ** 2 + t.tan() ** 2)
        ratio = flint.acb.elliptic_k(flint.acb(1 - m)) / (2 * flint.acb.elliptic_k(flint.acb(m)))
        found = flint.arb(mpmath.nstr(lv.fields.form_factor(lv.fields.dam_seepage(*form), 30), 40))
        assert abs(found - ratio.real) < 1e-28


def eval_fraction(text):
    """A number or a text such as 1/4."""
    above, _, below = str(text).partition("/")
    return int(above) / int(below or 1)


def test_uplift_under_a_base_on_deep_ground():
    """(h/pi) arccos(x/b): Harr 1962 (from memory); the layer is 1000 bases deep, off by its square."""
    x = np.linspace(-0.9, 0.9, 7)
    dam = lv.fields.dam_seepage(2, 2000)
    assert np.abs(dam.value(np.column_stack([x, 0 * x])) - np.arccos(x) / math.pi).max() < 1e-6


def graded(place, end):
    """Coordinates from 0 to end, geometrically finer towards 0 and towards a place between (if not 0)."""
    t = np.concatenate([[0.0], 0.7 ** np.arange(24)])
    if not place:
        return np.unique(end * t)
    near = place / 2 * t
    return np.unique(np.concatenate([near, place - near, place + (end - place) * t]).round(14))


def conductance(half, pile, depth, reach):
    """Discharge over k h by quadratic elements on half of the layer, cut off by a tight wall far away."""
    x, depths = graded(half, reach), graded(pile, depth)
    mesh = skfem.MeshTri.init_tensor(x, -depths[::-1])
    basis = skfem.Basis(mesh, skfem.ElementTriP2())
    bed = basis.get_dofs(lambda p: (np.abs(p[1]) < 1e-12) & (p[0] > half - 1e-12)).all()
    middle = basis.get_dofs(lambda p: (np.abs(p[0]) < 1e-12) & (p[1] < -pile + 1e-12)).all()
    stiffness = skfem.BilinearForm(lambda u, v, _: dot(grad(u), grad(v))).assemble(basis)
    u = basis.zeros()
    u[middle] = 0.5
    u = skfem.solve(*skfem.condense(stiffness, x=u, D=np.concatenate([bed, middle])))
    return float(u @ stiffness @ u) / 0.5


@pytest.mark.parametrize("form", [(2, 1, 0), (0, 1, "1/2"), (2, "3/2", "3/5")])
def test_form_factor_by_finite_elements(form):
    """scikit-fem on a mesh graded to toe and tip; the wall at 6 depths takes e^(-6 pi) of the discharge."""
    base, depth, pile = (eval_fraction(v) for v in form)
    found = conductance(base / 2, pile, depth, base / 2 + 6 * depth)
    assert math.isclose(found, float(lv.fields.form_factor(lv.fields.dam_seepage(*form))), rel_tol=2e-3)


def test_a_longer_pile_is_not_mistaken():
    """The twin: two hundredths of the depth more are told apart by all of these checks."""
    right, wrong = (float(lv.fields.form_factor(lv.fields.dam_seepage(0, 1, s))) for s in ("0.5", "0.52"))
    assert not math.isclose(right, wrong, rel_tol=2e-3)
    with pytest.raises(AssertionError):
        test_discharge_past_a_sheet_pile("0.52", PILES["0.5"])


def test_fifty_digits_of_the_pile_by_ball_arithmetic():
    """Exit gradient pi/(4 K(m) m) and k h/2 for s = T/2, m = sin(pi/4), k = 0.7 (Harr 1962, from memory)."""
    quantities = lv.catalogue["sheet-pile-in-layer"].quantities
    with flint.ctx.workprec(400):
        k = flint.acb.elliptic_k(flint.acb(1) / 2).real
        exact = flint.arb.pi() / (4 * k * (flint.arb(1) / 2).sqrt())
        stored = quantities["exit gradient beside the pile"].digits
        assert abs(flint.arb(stored.value) - exact) < flint.arb(stored.radius) < 1e-49
    assert quantities["discharge"].digits.value == "0.35"
