"""A record of the invented Marram Bay works with every verdict in it, built from the dataclasses alone."""

import math
from itertools import pairwise

import numpy as np
import pytest

from laplace_verify.campaign.record import (
    CaseInfo,
    Environment,
    PieceInfo,
    QuantityInfo,
    Record,
    RegularityInfo,
    Settings,
    SolverIdentity,
)
from laplace_verify.measure.results import ErrorMap, Level, Order, Study
from laplace_verify.measure.verdict import Verdict
from laplace_verify.principles.results import Check

SIZES = (8, 16, 32, 64)
MARKUP = "<script>alert('tide & \"sand\"')</script> 50 % of a_1 | #1 ~ {x} $y$ \\end{verbatim}"
BASIS = "order 2 for smooth solutions by the discrete maximum principle (Gerschgorin 1930)"


def levels(constant, order, sizes=SIZES, singular=False):
    """Return levels whose errors fall at this order, with a little scatter."""
    found = []
    for k, n in enumerate(sizes):
        wobble = 1 + 0.03 * (-1) ** k
        errors = {
            "max": constant * n**-order * wobble,
            "L2": 0.4 * constant * n**-order,
            "H1-semi": constant * n ** -min(order, 1.0),
        }
        found.append(
            Level(
                size=n,
                h=1 / n,
                unknowns=(n - 1) ** 2,
                seconds=2e-4 * 4**k,
                errors=errors,
                relative={norm: error / 3 for norm, error in errors.items()},
                judged=not (singular and k == 0),
                note="h is larger than half the smallest length of the case" if singular and k == 0 else "",
            )
        )
    return found


def orders(found, expected, observed, verdict, formal=2.0):
    """Return the orders of three norms, two of which decide."""
    pairs = {
        norm: [math.log2(a.errors[norm] / b.errors[norm]) for a, b in pairwise(found)]
        for norm in found[0].errors
    }
    left_out = {str(level.size): level.note for level in found if not level.judged}
    make = {
        "formal": formal,
        "expected": expected,
        "decides": True,
        "tolerance": 0.5,
        "basis": BASIS,
        "left_out": left_out,
    }
    return {
        "max": Order(
            observed=observed,
            low=observed - 0.1,
            high=observed + 0.1,
            verdict=verdict,
            pairs=pairs["max"],
            **make,
        ),
        "L2": Order(
            observed=observed + 0.03,
            low=observed - 0.07,
            high=observed + 0.13,
            verdict=verdict,
            pairs=pairs["L2"],
            **make,
        ),
        "H1-semi": Order(
            observed=1.0,
            low=0.95,
            high=1.05,
            formal=None,
            expected=None,
            decides=False,
            pairs=pairs["H1-semi"],
            note="H1-semi: no rate is proven for this norm and this kind of method",
        ),
    }


def square_info(case_id, title, conditions, **more):
    """Return what is known about a case on the unit square."""
    sides = {
        "left": ((0.0, 1.0), (0.0, 0.0)),
        "right": ((1.0, 0.0), (1.0, 1.0)),
        "bottom": ((0.0, 0.0), (1.0, 0.0)),
        "top": ((1.0, 1.0), (0.0, 1.0)),
    }
    pieces = tuple(
        PieceInfo(name=name, condition=conditions.get(name, "dirichlet"), outline=outline)
        for name, outline in sides.items()
    )
    make = {
        "statement": "Find u with Laplace's equation in the unit square and the given data on its sides.",
        "reading": "Steady temperature in a heat-exchanger plate of the Marram Bay seawater plant.",
        "formula": "sinh(pi y) sin(pi x) / sinh(pi)",
        "regularity": RegularityInfo(solution=math.inf, domain=2.0, scale=1.0),
        "sources": ("derived here by separation of variables",),
        "tags": ("smooth",),
    }
    return CaseInfo(id=case_id, title=title, dim=2, shape="rectangle", pieces=pieces, **{**make, **more})


def square_map(near_top, seed):
    """Return an error map of the unit square, its errors crowded at the top side or spread."""
    points = np.random.default_rng(seed).uniform(0.0, 1.0, (1500, 2))
    x, y = points.T
    errors = np.sin(np.pi * x) * (np.exp(8 * (y - 1)) if near_top else np.sin(np.pi * y)) * 1e-3
    return ErrorMap(size=64, points=points.tolist(), errors=errors.tolist())


def smooth_study(case_id, title, *, neumann, verdict=Verdict.PASS, observed=2.0, known=None, seed=1):
    found = levels(0.3, observed)
    held = "PASS" if verdict is Verdict.PASS else "FAIL"
    return Study(
        solver="pool model",
        case_id=case_id,
        case_title=title,
        verdict=verdict,
        sizes=list(SIZES),
        seed=0,
        levels=found,
        orders=orders(found, 2.0, observed, verdict),
        reasons=[f"max: formal order 2, observed {observed:.2f} over 4 levels: {held}"],
        remarks=["H1-semi: no rate is proven for this norm and this kind of method"],
        features={"Neumann condition": neumann, "shape": "rectangle", "dimension": 2.0, "tensor": False},
        error_map=square_map(neumann, seed),
        known=known,
    )


def disc_info():
    angle = np.linspace(0.0, 2 * math.pi, 73)
    rim = tuple((float(x), float(y)) for x, y in zip(np.cos(angle), np.sin(angle), strict=True))
    return CaseInfo(
        id="tidal-pool",
        title="Round tidal pool",
        dim=2,
        shape="disc",
        pieces=(PieceInfo(name="rim", condition="robin", outline=rim),),
        regularity=RegularityInfo(solution=math.inf, domain=math.inf, scale=1.0),
    )


def bad_studies():
    """Return one study each that is undecided, broken, not applicable and not run, with their cases."""
    rough = levels(0.2, 0.9, singular=True)
    angle = np.linspace(0.0, 1.5 * math.pi, 55)
    arc = tuple((float(x), float(y)) for x, y in zip(np.cos(angle), np.sin(angle), strict=True))
    slice_map = square_map(False, 7)
    infos = [
        CaseInfo(
            id="dam-toe",
            title="Toe of the dam",
            dim=2,
            shape="sector",
            pieces=(
                PieceInfo(name="start", condition="dirichlet", outline=((0.0, 0.0), (1.0, 0.0))),
                PieceInfo(name="arc", condition="neumann", outline=arc),
                PieceInfo(name="end", condition="dirichlet", outline=((0.0, -1.0), (0.0, 0.0))),
            ),
            formula="r^(2/3) sin(2θ/3)",
            regularity=RegularityInfo(
                solution=2 / 3, domain=2 / 3, scale=1.0, singular_points=((0.0, 0.0),), jumps=()
            ),
            quantities=(QuantityInfo(name="seepage", value=1.25, unit="m2/s", radius=1e-12),),
        ),
        disc_info(),
        CaseInfo(
            id="brine-tank", title="Brine tank", dim=3, shape="box", conductivity="[[2, 0.5], [0.5, 1]]"
        ),
        CaseInfo(id="duct", title="Duct", dim=1, shape="interval"),
    ]
    undecided = Study(
        solver="pool model",
        case_id="dam-toe",
        case_title="Toe of the dam",
        verdict=Verdict.INCONCLUSIVE,
        sizes=list(SIZES),
        seed=0,
        levels=rough,
        orders=orders(rough, 2 / 3, 0.9, Verdict.INCONCLUSIVE),
        reasons=["max: only 3 levels can be judged; run a finer size, 128", "L2: too rough"],
        error_map=ErrorMap(
            size=64,
            points=[p for p in slice_map.points if math.hypot(*p) < 1],
            errors=[e for p, e in zip(slice_map.points, slice_map.errors, strict=True) if math.hypot(*p) < 1],
        ),
    )
    make = {"solver": "pool model", "sizes": list(SIZES), "seed": 0}
    broken = Study(
        case_id="tidal-pool",
        case_title="Round tidal pool",
        verdict=Verdict.ERROR,
        reasons=[f"size 16: the solver raised ValueError: {MARKUP}"],
        crash=f"Traceback\n  File x\n{MARKUP}",
        **make,
    )
    beyond = Study(
        case_id="brine-tank",
        case_title="Brine tank",
        verdict=Verdict.NOT_APPLICABLE,
        reasons=["dimension 3 is beyond the declared {2}"],
        **make,
    )
    skipped = Study(
        case_id="duct", case_title="Duct", verdict=Verdict.NOT_RUN, reasons=["time limit reached"], **make
    )
    return [undecided, broken, beyond, skipped], infos


def make_record():
    """Six cases on the square (two fail, one deviates as declared), one of each other verdict, three laws."""
    plan = [
        ("hot-plate", False, Verdict.PASS, 2.0, None),
        ("cold-plate", False, Verdict.PASS, 1.98, None),
        ("insulated-plate", True, Verdict.FAIL, 1.02, None),
        ("sensor-plate", True, Verdict.FAIL, 0.97, None),
        ("old-plate", True, Verdict.FAIL, 1.0, "the closure at the outlet is of first order"),
        ("repaired-plate", False, Verdict.PASS, 2.01, "was wrong before the repair"),
    ]
    studies = [
        smooth_study(
            name, name.replace("-", " "), neumann=neumann, verdict=verdict, observed=p, known=known, seed=k
        )
        for k, (name, neumann, verdict, p, known) in enumerate(plan)
    ]
    infos = [
        square_info(name, name.replace("-", " "), {"top": "neumann"} if neumann else {})
        for name, neumann, *_ in plan
    ]
    infos[1] = square_info("cold-plate", MARKUP, {"left": "robin"}, statement=MARKUP, conductivity="2.5")
    others, other_infos = bad_studies()
    return Record(
        package_version="0.1.0",
        solver=SolverIdentity(
            name=f"pool model {MARKUP}",
            kind="finite difference",
            order="2",
            capabilities={"dims": "2", "conditions": "dirichlet, neumann"},
            module="pool.py:solve",
            source_sha256="ab" * 32,
            known={"old-plate": "the closure at the outlet is of first order"},
        ),
        environment=Environment(python="3.12.1", numpy="2.1", scipy="1.14", platform="Linux x86-64", cpus=2),
        settings=Settings(seed=5, sizes=SIZES),
        command="laplace-verify run pool.py:solve --seed 5 --sizes 8,16,32,64",
        started="2031-03-04T05:06:07+00:00",
        finished="2031-03-04T05:07:07+00:00",
        studies=(*studies, *others),
        checks=(
            Check(
                law="constants are reproduced",
                verdict=Verdict.PASS,
                violation=1e-15,
                tolerance=1e-10,
                reason="kept",
            ),
            Check(
                law="maximum principle",
                verdict=Verdict.FAIL,
                violation=0.013,
                tolerance=1e-9,
                reason="u exceeds its boundary values",
                example="lv.problem(lv.Rectangle((0, 0), (1, 1)), {})",
                points=((0.5, 0.25), (0.5, 0.75)),
                pieces=(PieceInfo(name="left", condition="dirichlet", outline=((0.0, 1.0), (0.0, 0.0))),),
            ),
            Check(law="mean value", verdict=Verdict.NOT_APPLICABLE, reason="no callable answer"),
        ),
        cases=(*infos, *other_infos),
    )


@pytest.fixture
def record():
    """Return a record of one's own to change."""
    return make_record()


@pytest.fixture(scope="session")
def whole_record():
    """Return the same record, to be left as it is."""
    return make_record()
