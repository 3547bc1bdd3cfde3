"""scikit-fem (finite elements, independent of this project) gets the verdicts that theory says.

P1 and P2 elements on rectangles, L-shapes and discs, with scikit-fem's own meshes; the disc under P2 is
isoparametric. Sound elements must pass every case they can do; the same elements with a declared order one
too high, or with straight sides under P2 on the disc, must fail.
"""

import numpy as np
import pytest

import laplace_verify as lv

skfem = pytest.importorskip("skfem")

CAPABILITIES = {
    "kind": "finite element",
    "dims": {2},
    "shapes": {"rectangle", "l-shape", "disc"},
    "conditions": {"dirichlet", "neumann", "robin"},
    "conductivity": {"scalar", "tensor"},
}
QUICK = {"plate-wave", "plate-flux-top", "wall-mixed-conditions", "l-shape-corner", "disc-fourier"}


def mesh_of(problem, n, curved):
    """Return a triangulation with about n cells along every side; the disc's has a power of two."""
    shape = problem.shape
    if shape.is_a("disc"):
        kind = skfem.MeshTri2 if curved else skfem.MeshTri
        return kind.init_circle(round(np.log2(n))).scaled(shape.radius).translated(shape.centre)
    mesh = skfem.MeshTri.init_tensor(*(lines_along(problem, axis, n) for axis in (0, 1)))
    outside = ~shape.contains(mesh.p[:, mesh.t].mean(axis=1).T)
    return mesh.remove_elements(np.flatnonzero(outside)) if outside.any() else mesh


def lines_along(problem, axis, n):
    """Return about n + 1 grid lines that meet the ends of every piece."""
    ends = np.concatenate([piece.ends[:, axis] for piece in problem.pieces])
    breaks = np.unique(np.round(ends, 12))
    counts = np.ceil(n * np.diff(breaks) / (breaks[-1] - breaks[0])).astype(int)
    pieces = [
        np.linspace(a, b, k, endpoint=False) for a, b, k in zip(breaks, breaks[1:], counts, strict=False)
    ]
    return np.append(np.concatenate(pieces), breaks[-1])


def facets_of_pieces(mesh, pieces):
    """Return the boundary facets of every piece, by the nearest piece: midpoints of chords miss curves."""
    facets = mesh.boundary_facets()
    middle = mesh.p[:, mesh.facets[:, facets]].mean(axis=1).T
    distances = [np.linalg.norm(middle - piece.project(middle), axis=1) for piece in pieces]
    owner = np.argmin(distances, axis=0)
    return [facets[owner == index] for index in range(len(pieces))]


def solve_with(element, curved):
    def solve(problem, n):
        mesh = mesh_of(problem, n, curved)
        basis = skfem.Basis(mesh, element)
        K = problem.tensor
        matrix = skfem.BilinearForm(
            lambda u, v, w: np.einsum("ij,j...,i...->...", K, u.grad, v.grad)
        ).assemble(basis)
        load, u, fixed = basis.zeros(), basis.zeros(), []
        for piece, facets in zip(problem.pieces, facets_of_pieces(mesh, problem.pieces), strict=True):
            if piece.kind == "dirichlet":
                nodes = basis.get_dofs(facets).all()
                u[nodes] = piece.data(basis.doflocs[:, nodes].T)
                fixed.append(nodes)
                continue
            side = basis.boundary(facets)
            x = side.global_coordinates()
            points, shape = x.reshape(2, -1).T, x.shape[1:]
            load += skfem.LinearForm(lambda v, w: w.g * v).assemble(side, g=piece.data(points).reshape(shape))
            if piece.kind == "robin":
                alpha = piece.alpha(points).reshape(shape)
                matrix += skfem.BilinearForm(lambda u, v, w: w.a * u * v).assemble(side, a=alpha)
        if fixed:  # unique: a corner node named twice would be carried to the right-hand side twice
            system = skfem.condense(matrix, load, x=u, D=np.unique(np.concatenate(fixed)))
        elif problem.constant is None:  # Robin data fix the level
            system = matrix, load
        else:  # pure Neumann: one node is held, the level follows from the mean
            system = skfem.condense(matrix, load, D=np.array([0]))
        u = skfem.solve(*system)
        if problem.constant is not None:
            mass = skfem.LinearForm(lambda v, w: 1.0 * v).assemble(basis)
            u += problem.constant[1] - mass @ u / mass.sum()
        cells = "triangle6" if isinstance(element, skfem.ElementTriP2) else "triangle"
        return lv.Answer(basis.doflocs.T, u, cells={cells: basis.element_dofs.T})

    return solve


P1 = lv.adapt(
    solve_with(skfem.ElementTriP1(), curved=False),
    name="scikit-fem P1",
    order={"L2": 2, "H1-semi": 1},
    **CAPABILITIES,
)
P2 = lv.adapt(
    solve_with(skfem.ElementTriP2(), curved=True),
    name="scikit-fem P2",
    order={"L2": 3, "H1-semi": 2},
    **CAPABILITIES,
)
CASES = [
    pytest.param(id_, id=id_, marks=[] if id_ in QUICK else [pytest.mark.slow])
    for id_ in lv.catalogue
    if P1.refuses(lv.catalogue[id_].problem) is None
]


@pytest.mark.parametrize("solver", [P1, P2], ids=["P1", "P2"])
@pytest.mark.parametrize("case_id", CASES)
def test_sound_elements_pass(solver, case_id):
    study = lv.study(solver, lv.catalogue[case_id])
    assert study.verdict == lv.Verdict.PASS, f"{study}\n{study.table()}"


def test_the_reentrant_corner_costs_the_order_that_theory_says():
    # Strang & Fix 1973; Wahlbin 1984 (from memory): H1 order 2/3, L2 order 4/3, whatever the degree.
    study = lv.study(P2, lv.catalogue["l-shape-corner"])
    assert study.orders["H1-semi"].expected == pytest.approx(2 / 3, rel=1e-12)
    assert study.orders["L2"].expected == pytest.approx(4 / 3, rel=1e-12)
    assert study.orders["H1-semi"].observed == pytest.approx(2 / 3, abs=0.05)
    assert study.orders["L2"].observed == pytest.approx(4 / 3, abs=0.1)


def test_an_order_declared_one_too_high_fails_and_the_reason_says_so():
    boastful = lv.adapt(
        solve_with(skfem.ElementTriP1(), curved=False), name="boastful", order={"L2": 3}, **CAPABILITIES
    )
    study = lv.study(boastful, lv.catalogue["plate-wave"])
    assert study.verdict == lv.Verdict.FAIL
    assert any("formal order 3" in reason and "observed 2" in reason for reason in study.reasons)


def test_straight_sides_under_quadratic_elements_fail_on_the_disc():
    # Strang & Fix 1973, ch. 4.4 (from memory): a polygonal boundary limits P2 to order 3/2 in H1 and 2 in L2.
    straight = lv.adapt(
        solve_with(skfem.ElementTriP2(), curved=False),
        name="straight P2",
        order={"L2": 3, "H1-semi": 2},
        **CAPABILITIES,
    )
    study = lv.study(straight, lv.catalogue["disc-fourier"])
    assert study.verdict == lv.Verdict.FAIL, str(study)
