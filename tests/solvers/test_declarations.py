"""Declared capabilities: defaults, refusals, and what a formal order promises in each norm."""

import pytest

import laplace_verify as lv


def solve(_problem, _n):
    """Stand for a solver that is never called here."""
    raise lv.Refused("never called")


def declare(**changed):
    """Return an adapter with sound declarations, some changed."""
    return lv.adapt(solve, **{"kind": "finite element", "order": 2, **changed})


def test_what_is_left_out_means_any_bounded_cartesian_scalar_problem():
    adapter = declare()
    assert adapter.name == "solve"
    assert adapter.dims == {1, 2, 3}
    assert adapter.shapes is None
    assert adapter.conditions == {"dirichlet", "neumann", "robin"}
    assert adapter.conductivity == {"scalar"}
    assert adapter.coordinates == {"cartesian"}
    assert not adapter.unbounded
    assert adapter.clearance == 0
    assert adapter.sizes is None


@pytest.mark.parametrize(
    ("changed", "message"),
    [
        ({"kind": "finite elements"}, r"kind must be one of .* did you mean 'finite element'"),
        ({"kind": None}, r"kind must be one of"),
        ({"order": 0}, r"order must be a positive number"),
        ({"order": -2}, r"order must be a positive number"),
        ({"order": float("nan")}, r"order must be a positive number"),
        ({"order": True}, r"order must be a positive number"),
        ({"order": "spectral"}, r'order must be a positive number or "exponential", got \'spectral\''),
        ({"order": None}, r"order must be a positive number"),
        ({"order": {}}, r"order must not be an empty dict"),
        ({"order": {"L3": 2}}, r"order: 'L3' is no norm; did you mean"),
        ({"order": {"flux:": 2}}, r"order: 'flux:' is no norm"),
        ({"order": {"max": -1}}, r"order\['max'\] must be a positive number"),
        ({"dims": 2}, r"dims must be a set of dimensions, got 2; write \{2\}"),
        ({"dims": {4}}, r"dims must be a set of 1, 2 and 3, got \{4\}"),
        ({"dims": set()}, r"dims must be a set of 1, 2 and 3"),
        (
            {"shapes": "rectangle"},
            r"shapes must be a set of names, got the string 'rectangle'; write \{'rectangle'\}",
        ),
        ({"shapes": {"rectangel"}}, r"shapes: 'rectangel' is unknown; did you mean 'rectangle'"),
        ({"shapes": set()}, r"shapes must not be empty"),
        ({"shapes": 3}, r"shapes must be a set of names, got 3"),
        ({"conditions": {"Dirichlet"}}, r"conditions: 'Dirichlet' is unknown; did you mean 'dirichlet'"),
        ({"conductivity": {"tensors"}}, r"conductivity: 'tensors' is unknown; did you mean 'tensor'"),
        ({"coordinates": {"polar"}}, r"coordinates: 'polar' is unknown"),
        ({"unbounded": "yes"}, r"unbounded must be True or False"),
        ({"fixes_constant": 1}, r"fixes_constant must be True or False"),
        ({"error_floor": 0.0}, r"error_floor must be positive"),
        ({"error_floor": "1e-12"}, r"error_floor must be positive, got '1e-12'"),
        ({"clearance": -0.1}, r"clearance must be at least 0"),
        ({"reproduces_degree": -1}, r"reproduces_degree must be a whole number"),
        ({"reproduces_degree": 1.5}, r"reproduces_degree must be a whole number"),
        ({"discrete_laws": "maximum principle"}, r"discrete_laws must be a set or list of texts"),
        (
            {"formulation": "direct"},
            r'formulation belongs to kind="boundary element", but kind is \'finite element\'',
        ),
        (
            {"kind": "boundary element", "formulation": "dirct"},
            r"formulation must be one of .* did you mean 'direct'",
        ),
        (
            {"discretisation": "Galerkin"},
            r'discretisation belongs to kind="boundary element", but kind is \'finite element\'',
        ),
        ({"sizes": (8, 16)}, r"sizes must be three or more"),
        ({"sizes": (8, 32, 16)}, r"sizes must be increasing whole numbers"),
        ({"sizes": (8, 8, 16)}, r"sizes must be increasing whole numbers"),
        ({"sizes": (8, 16.5, 32)}, r"sizes must be increasing whole numbers"),
        ({"sizes": 8}, r"sizes must be increasing whole numbers"),
        ({"name": ""}, r"name must be a text"),
        ({"claims": "fast"}, r"claims must be a set or list of texts"),
        ({"claims": [1]}, r"claims must hold texts only"),
        ({"known": {"hot plate": ""}}, r"known\['hot plate'\] must be the reason in words"),
        ({"known": ["hot plate"]}, r"known must be a dict with names as keys"),
        ({"expected": {"L2": 2}}, r"expected\['L2'\] must be an order and the reason for it, such as \(2,"),
        ({"expected": {"L2": ("fast", "graded mesh")}}, r"expected\['L2'\] must be a positive number"),
        ({"expected": {"L2": (2, "")}}, r"expected\['L2'\] must be the reason in words"),
        ({"expected": {"hot plate": (2, "graded mesh")}}, r"expected: 'hot plate' is no norm"),
        ({"variants": {"fast": {}}}, r"adapt has no argument 'variants'"),
        ({"dim": {2}}, r"adapt has no argument 'dim'; did you mean 'dims'"),
    ],
)
def test_declarations_that_make_no_sense_are_refused_by_name(changed, message):
    with pytest.raises(lv.AdapterError, match=message):
        declare(**changed)


@pytest.mark.parametrize("missing", ["kind", "order"])
def test_kind_and_order_must_be_declared(missing):
    given = {"kind": "other", "order": 2}
    del given[missing]
    with pytest.raises(lv.AdapterError, match=f"{missing} must be declared"):
        lv.adapt(solve, **given)


def lacks_n(_problem):
    """Lack the resolution number."""


def wants_more(_problem, _n, _mesh):
    """Ask for a third argument."""


@pytest.mark.parametrize(
    ("function", "message"),
    [
        (3, r"solve must be a function of \(problem, n\), got int"),
        (lacks_n, r"solve must accept two positional arguments, lacks_n\(problem, n\)"),
        (wants_more, r"solve must accept two positional arguments, wants_more\(problem, n\): missing"),
    ],
)
def test_what_cannot_be_called_with_problem_and_n_is_refused(function, message):
    with pytest.raises(lv.AdapterError, match=message):
        lv.adapt(function, kind="other", order=1)


@pytest.mark.parametrize(
    ("kind", "order", "promised"),
    [
        # FE of degree 2: Ciarlet (1978), orders 3 in L2 and 2 in H1.
        ("finite element", 3, {"max": 3, "L1": 3, "L2": 3, "H1-semi": 2, "energy": 2, "flux:top": None}),
        ("finite element", 1, {"L2": 1, "H1-semi": None, "energy": None}),
        ("finite difference", 2, {"max": 2, "L1": 2, "L2": 2, "H1-semi": None, "energy": None}),
        ("finite volume", 2, {"max": 2, "L1": 2, "L2": 2, "H1-semi": None}),
        ("boundary element", 2, {"max": 2, "L2": 2, "H1-semi": None}),
        ("stochastic", 0.5, {"max": 0.5, "L2": 0.5}),
        ("spectral", "exponential", {"max": "exponential", "H1-semi": "exponential", "flux:top": None}),
        ("other", {"L2": 2, "flux": 1}, {"L2": 2, "max": None, "flux:top": 1, "flux:left": 1}),
        ("other", {"flux:top": 2, "flux": 1}, {"flux:top": 2, "flux:left": 1, "trace:top": None}),
    ],
)
def test_a_formal_order_promises_what_theory_proves_for_the_kind(kind, order, promised):
    adapter = declare(kind=kind, order=order)
    assert {norm: adapter.formal_order(norm) for norm in promised} == promised


def test_asking_for_an_unknown_norm_is_refused():
    with pytest.raises(lv.AdapterError, match=r"'L∞' is no norm"):
        declare().formal_order("L∞")


def test_the_declaration_can_be_written_down_as_plain_data():
    told = declare(dims={2, 1}, shapes={"rectangle", "disc"}, sizes=[4, 8, 16], known={"a": "b"}).describe()
    assert told["dims"] == [1, 2]
    assert told["shapes"] == ["disc", "rectangle"]
    assert told["sizes"] == [4, 8, 16]
    assert told["known"] == {"a": "b"}
    assert "function" not in told
