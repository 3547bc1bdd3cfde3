"""A proven bound on the error of the flux through a side, of a corner fit whose error e is bounded.

The flux of the fit itself is a rise of its stream function. That of e through a Dirichlet side S from a to b,
with |e| <= eps on the polygon and |de/dn| <= eta on Neumann sides, is by Green's identity

    integral over S of de/dn =   integral of e dF/dn over the boundary
                               - integral of F de/dn over the other sides
                               - integral of e (Laplacian of F) over the polygon

for any F that is 1 on S and 0 on the other Dirichlet sides. With r the distance from an end and theta the
angle from S in its sector of opening w and radius d, a cut-off c that falls from 1 at d/2 to 0 at d along a
quadratic spline (|c'| <= 4/d, |c''| = 16/d^2), and x, y coordinates along S and into the polygon,

    F = c(r) f(theta) at both ends + (1 - c(x) - c(L - x)) s(y) between, s falling from 1 to 0 at y = h,

f = 1 if the next side is a Neumann side, f = 1 - theta/w if it is a Dirichlet side. The Laplacian of F
integrates to at most 7 w at either end and 4 h/d + 4 h/d' + 4 L/h between. At a Dirichlet end dF/dn is
1/(w r) on one side and - 1/(w r) on the other. There e has equal limits at the vertex, and slopes of at most
t, so that both together give at most

    1/w times the integral of min(2 t r, 2 eps)/r = (2 eps/w) (1 + log(t d/eps)),

in which t may be coarse. At a Neumann end the other side gives at most eta d.

*Slopes.* On a side the residual is the sum of terms analytic in the disc of radius d about the vertex, at
most M there, and a polynomial of degree p <= 12 (the data, and the logarithms of the side's own corners), at
most M + eps on the first half of d: its slope there is at most 2 M/d by Cauchy's inequality and
4 p^2 (M + eps)/d by Markov's (both from memory, unchecked). The rest is derived here.
"""

from __future__ import annotations

from decimal import Decimal

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.fields._precision import working
from laplace_verify.references._corner_rows import DATA_DEGREE, Terms
from laplace_verify.references.corner_bound import UP, Bound, largest_in_disc
from laplace_verify.references.local_cover import clear, opening, vertex_reach

__all__ = ["flux_bound"]

SAFE = 1.0 + 1e-6  # rounding of lengths and angles
WORKING = 120  # digits
STEPS = 256  # points of a side at which the height above it is measured


def flux_bound(terms: Terms, texts: list[str], bound: Bound) -> str:
    """Return a bound for the error of the flux through any side, "" if none can be given.

    Parameters
    ----------
    terms, texts
        The ansatz and its coefficients.
    bound
        That of the error and the residuals.
    """
    corners = np.array([[float(c) for c in vertex] for vertex in terms.vertices])
    sizes = [abs(float(text)) for text in texts]
    found = []
    for side, kind in enumerate(terms.kinds):
        if kind == "neumann":
            found.append(bound.residuals["neumann"] * Decimal(terms.length(side)))
            continue
        error = _through(terms, sizes, corners, side, bound)
        if error is None:
            return ""
        found.append(error)
    return str(UP.create_decimal(max(found) * Decimal(SAFE)))


def _through(terms: Terms, sizes: list[float], corners: Array, side: int, bound: Bound) -> Decimal | None:
    """Return the bound for one Dirichlet side."""
    eps, count = Decimal(bound.radius), len(corners)
    if not eps:
        return eps
    error, area, reaches = Decimal(0), 0.0, []
    after = (side + 1) % count
    for vertex, beside in ((side, (side - 1) % count), (after, after)):
        d, turn = vertex_reach(corners, vertex), opening(corners, vertex, (vertex - 1) % count)
        reaches.append(d)
        area += 7.0 * turn
        if terms.kinds[beside] == "neumann":
            error += bound.residuals["neumann"] * Decimal(d)
            continue
        if _jump(terms, side, beside, vertex):
            return None
        steepest = _steepest(terms, sizes, corners[vertex], (side, beside), d, eps)
        if steepest is None:
            return None
        rise = max(Decimal(2), steepest * Decimal(d) / eps)
        error += 2 * eps / Decimal(turn) * (1 + rise.ln())
    length, height = terms.length(side), _height(corners, side, reaches)
    if not height > 0.0:
        return None
    area += 4.0 * height * sum(1.0 / d for d in reaches) + 4.0 * length / height
    return error + eps * Decimal(area)


def _jump(terms: Terms, side: int, beside: int, vertex: int) -> bool:
    """Return whether the data of two Dirichlet sides differ at their vertex: then the flux is infinite."""
    ctx = working(WORKING)
    place = dict(zip("xy", (ctx.number(c) for c in terms.vertices[vertex]), strict=True))
    first, second = (ctx.convert(terms.data[k].value(ctx, place)) for k in (side, beside))
    return bool(abs(first - second) > (1 + abs(first)) * ctx.mpf(10) ** -WORKING)


def _steepest(
    terms: Terms, sizes: list[float], vertex: Array, sides: tuple[int, int], d: float, eps: Decimal
) -> Decimal | None:
    """Return a bound for the slope of the residual along both sides of a vertex, None if a corner is near."""
    largest = [largest_in_disc(terms, sizes, side, vertex, d) for side in sides]
    if None in largest:
        return None
    high = Decimal(max(m for m in largest if m is not None))
    return (2 * high + 4 * DATA_DEGREE**2 * (high + eps)) / Decimal(d)


def _height(corners: Array, side: int, reaches: list[float]) -> float:
    """Return a height up to which the polygon is free above the middle of a side."""
    start, stop = corners[side], corners[(side + 1) % len(corners)]
    length = float(np.hypot(*(stop - start)))
    places = np.linspace(reaches[0] / 2.0, length - reaches[1] / 2.0, STEPS)
    points = start + (stop - start) * (places / length)[:, None]
    # the height changes no faster than the place
    return min(clear(corners, side, point) for point in points) - float(places[1] - places[0])
