"""By which other route the stored values of a case are confirmed, and how far.

The digits of a case rest on the formula of its field (`Field.basis`). Beside that, tests compute the stored
values once more by a route that shares no code with the fields: they read the parameters in the file of the
case and end in a number of their own. Which route applies follows from the kinds of field that a file names;
the tests ask here which one to run, and the index of the reference cases says so.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any, Literal

from laplace_verify.problems import Case

__all__ = ["CONFIRMATIONS", "Confirmation", "confirmation_of", "kinds_in"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Confirmation:
    """A route by which stored values are computed once more.

    Attributes
    ----------
    route
        How, in words.
    source
        What the route follows.
    digits, counted
        To how many digits it confirms values and gradients: "significant" (of a gradient, those of its
        largest component), or "behind the point" where numbers are small.
    share
        Of the points of each case that it reaches, at least.
    kinds
        Kinds of field it can do; every kind in the file of a case must be among them.
    """

    route: str
    source: str
    digits: int
    counted: Literal["significant", "behind the point"]
    share: float
    kinds: frozenset[str]


COMPOSED = frozenset({
    "affine", "along-z", "axisymmetric", "coaxial", "inverted", "regions", "scaled", "shifted", "stretched",
    "sum",
})  # fmt: skip
CLOSED = frozenset({
    "box-mode", "dipole", "disc-arcs", "disc-fourier", "edge-wave", "elliptic-multipole", "exp-trig",
    "flow-past", "loaded-rectangle", "log-source", "point-source", "polynomial", "quarter-wave", "radial",
    "rectangle-modes", "solid", "spheroid", "wedge", "zonal",
})  # fmt: skip
MAPPED = frozenset({"cone", "dam-seepage", "flow-past-square", "half-edge", "prism", "square-multipole"})

CONFIRMATIONS: dict[str, Confirmation] = {
    "balls": Confirmation(
        route="ball arithmetic from the parameters in the file",
        source="formulas written again for python-flint (Johansson 2017, IEEE Trans. Computers 66, Arb)",
        digits=48,
        counted="significant",
        share=1.0,
        kinds=COMPOSED | CLOSED,
    ),
    "maps": Confirmation(
        route="conformal map inverted, special functions and faces of bodies, in ball arithmetic",
        source="Legendre's integral, hypergeometric and Legendre functions of Arb (Johansson 2017); "
        "MacMillan 1930, The Theory of the Potential, art. 43",
        digits=48,
        counted="significant",
        share=1.0,
        kinds=COMPOSED | MAPPED,
    ),
    "integrals": Confirmation(
        route="rigorous quadrature of Poisson's or Laplace's integral of the data",
        source="Whittaker & Watson 1927, A Course of Modern Analysis, section 18.3; Arb's integration",
        digits=46,
        counted="behind the point",
        share=0.9,
        kinds=frozenset(
            {
                "hemispheres",
                "loaded-disc",
                "rectangle-convection",
                "rectangle-exponential",
                "rectangle-pieces",
                "rectangle-sides",
            }
        ),
    ),
    "expansions": Confirmation(
        route="expansion summed in ball arithmetic, its conditions looked at along the boundary",
        source="corner powers of Lehman 1959 and the coefficients in the file; Arb",
        digits=48,
        counted="behind the point",
        share=1.0,
        kinds=frozenset({"corner-powers"}),
    ),
    "series": Confirmation(
        route="eigenfunction series in bispherical coordinates",
        source="Morse & Feshbach 1953, Methods of Theoretical Physics, section 10.3",
        digits=48,
        counted="significant",
        share=1.0,
        kinds=frozenset({"sphere-pair"}),
    ),
    "modes": Confirmation(
        route="integral in the complex plane between the poles of two eigenfunction series",
        source="derived in tests/references/test_referee_modes.py from the series of Carslaw & Jaeger 1959, "
        "sections 6.2 and 8.3; Bessel functions of Arb",
        digits=48,
        counted="behind the point",
        share=0.85,
        kinds=frozenset({"box-faces", "cylinder-faces"}),
    ),
}


def confirmation_of(case: Case) -> tuple[str, Confirmation] | None:
    """Return name and description of the route that confirms a case, None if there is none.

    Examples
    --------
    >>> from laplace_verify import fields
    >>> from laplace_verify.geometry import Disc
    >>> from laplace_verify.problems import case
    >>> confirmation_of(case(Disc((0, 0), 1), {}, fields.polynomial(2)))[0]
    'balls'
    """
    if case.problem.ill_posed is not None:
        return None  # there is no value to confirm
    kinds = frozenset(kinds_in(case.exact.spec()))
    for name, confirmation in CONFIRMATIONS.items():
        if kinds <= confirmation.kinds:
            return name, confirmation
    return None


def kinds_in(spec: Any) -> Iterator[str]:
    """Yield the kinds of all fields in a specification.

    >>> list(kinds_in({"kind": "sum", "factors": [2], "terms": [{"kind": "affine", "coefficients": [1]}]}))
    ['sum', 'affine']
    """
    if isinstance(spec, dict):
        if isinstance(spec.get("kind"), str):
            yield spec["kind"]
        for part in spec.values():
            yield from kinds_in(part)
    elif isinstance(spec, list):
        for part in spec:
            yield from kinds_in(part)
