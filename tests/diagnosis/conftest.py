"""Studies and records made by hand for tests of the diagnosis."""

import pytest

from laplace_verify.campaign.record import CaseInfo, Environment, PieceInfo, Record, Settings, SolverIdentity
from laplace_verify.measure.results import Level, Order, Study
from laplace_verify.measure.signs import Sign
from laplace_verify.measure.verdict import Verdict

SIDES = {
    "left": ((0.0, 1.0), (0.0, 0.0)),
    "right": ((1.0, 0.0), (1.0, 1.0)),
    "bottom": ((0.0, 0.0), (1.0, 0.0)),
    "top": ((1.0, 1.0), (0.0, 1.0)),
}


def _study(
    case_id, verdict, features, *, observed=2.0, norm="max", error_map=None, known=None, unknowns=49,
    local=None, nodal=None, remarks=(), signs=(), relative=None,
):  # fmt: skip
    ran = verdict is not Verdict.ERROR
    sizes = (8, 16, 32, 64) if local or relative else (8,)
    levels = [
        Level(
            size=n, h=1 / n, unknowns=unknowns, seconds=0.1, errors={norm: 0.1},
            relative={"L2": relative[k]} if relative else {}, nodal=nodal,
        )
        for k, n in enumerate(sizes)
    ]  # fmt: skip
    order = Order(
        observed=observed,
        low=observed - 0.1,
        high=observed + 0.1,
        formal=2.0,
        expected=2.0,
        decides=True,
        tolerance=0.5,
        verdict=verdict if verdict in (Verdict.PASS, Verdict.FAIL) else None,
    )
    return Study(
        solver="pool model",
        case_id=case_id,
        case_title=case_id,
        verdict=verdict,
        sizes=list(sizes),
        seed=0,
        levels=levels if ran else [],
        orders={norm: order} if ran else {},
        features=features,
        error_map=error_map,
        known=known,
        local=local or {},
        remarks=list(remarks),
        signs=[Sign(kind=kind, text=f"words on a {kind}") for kind in signs],
    )


def _record(studies, dims=None, checks=(), conditions=None):
    named = {"top": "robin"} | (conditions or {})
    cases = tuple(
        CaseInfo(
            id=s.case_id,
            title="",
            dim=(dims or {}).get(s.case_id, 2),
            shape="rectangle",
            pieces=tuple(
                PieceInfo(name=n, condition=named.get(n, "dirichlet"), outline=o) for n, o in SIDES.items()
            ),
        )
        for s in studies
    )
    return Record(
        package_version="0",
        solver=SolverIdentity(name="s", kind="other", order="2"),
        settings=Settings(),
        environment=Environment(python="", numpy="", scipy="", platform="", cpus=1),
        studies=tuple(studies),
        cases=cases,
        checks=tuple(checks),
    )


@pytest.fixture
def study():
    """Return a function that makes a study."""
    return _study


@pytest.fixture
def record():
    """Return a function that makes a record of studies."""
    return _record
