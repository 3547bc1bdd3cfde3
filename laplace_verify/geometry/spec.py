"""Shapes as plain data, for files: ``{"kind": "disc", "centre": [0.0, 0.0], "radius": 1.0}`` and back.

Numbers survive exactly: JSON writes a float64 with the shortest digits that read back as the same number.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import fields
from typing import Any

from laplace_verify.errors import GeometryError, nearest_names
from laplace_verify.geometry.base import Shape
from laplace_verify.geometry.cartesian import Box, Interval, Rectangle
from laplace_verify.geometry.cones import ConeSection
from laplace_verify.geometry.halves import HalfAnnulus, HalfDisc
from laplace_verify.geometry.pairs import PairShell
from laplace_verify.geometry.parabolas import ConfocalParabolas
from laplace_verify.geometry.planes import HalfSpace, Strip
from laplace_verify.geometry.polygons import LShape, Polygon
from laplace_verify.geometry.prisms import NotchedCube, Prism
from laplace_verify.geometry.round import Annulus, Disc, Ellipse, Sector
from laplace_verify.geometry.solids import Ball, Cylinder, SphericalShell
from laplace_verify.geometry.spheroids import EllipticRing, Spheroid, SpheroidalShell
from laplace_verify.geometry.thin import RoundPlate, Screen
from laplace_verify.geometry.unbounded import Exterior

__all__ = ["SHAPES", "shape_from_spec", "shape_to_spec"]

SHAPES: dict[str, type[Shape]] = {
    shape.kind: shape
    for shape in (
        Interval, Rectangle, Box, Disc, Ellipse, Annulus, Sector, HalfDisc, HalfAnnulus, ConeSection, LShape,
        Polygon, ConfocalParabolas,
        Ball, SphericalShell, Cylinder, Prism, NotchedCube,
        EllipticRing, Spheroid, SpheroidalShell, PairShell, Screen, RoundPlate, Exterior, HalfSpace, Strip,
    )
}  # fmt: skip

OPTIONAL = {"holes", "inner_centre"}
EXTRA = {"splits", "names"}  # written as "split" and "names", if there are any


def shape_to_spec(shape: Shape) -> dict[str, Any]:
    """Return the shape as numbers, strings, lists and dictionaries.

    >>> from laplace_verify.geometry import Rectangle
    >>> shape_to_spec(Rectangle((0, 0), (2, 1)).split(top=[0.5]))
    {'kind': 'rectangle', 'lower': [0.0, 0.0], 'upper': [2.0, 1.0], 'split': {'top': [0.5]}}
    """
    if type(shape) not in SHAPES.values():
        raise GeometryError(
            f"only the shapes of this package can be written down, got {type(shape).__name__}"
        )
    spec: dict[str, Any] = {"kind": shape.kind}
    for field in fields(shape):
        value = getattr(shape, field.name)
        if field.name in EXTRA or (field.name in OPTIONAL and not value):
            continue
        spec[field.name] = _plain(value)
    if shape.splits:
        spec["split"] = {name: list(values) for name, values in shape.splits}
    if shape.names:
        spec["names"] = dict(shape.names)
    return spec


def shape_from_spec(spec: Mapping[str, Any]) -> Shape:
    """Return the shape that `spec` describes.

    Raises
    ------
    GeometryError
        If the kind is unknown, or a field is missing, unknown or not what the shape needs; it names the
        field.

    Examples
    --------
    >>> shape_from_spec({"kind": "disc", "centre": [0, 0], "radius": 2})
    Disc((0.0, 0.0), 2.0)
    """
    if not isinstance(spec, Mapping):
        raise GeometryError(f"a shape must be a table with the field 'kind', got {type(spec).__name__}")
    given = dict(spec)
    kind = given.pop("kind", None)
    if not isinstance(kind, str) or kind not in SHAPES:
        raise GeometryError(f"kind {kind!r} is no shape; {nearest_names(str(kind), SHAPES)}")
    split, names = given.pop("split", {}), given.pop("names", {})
    shape = SHAPES[kind]
    known = [field.name for field in fields(shape) if field.name not in EXTRA]
    for name in given:
        if name not in known:
            raise GeometryError(f"a {kind} has no field {name!r}; {nearest_names(str(name), known)}")
    for name in known:
        if name not in given and name not in OPTIONAL:
            raise GeometryError(f"a {kind} needs the field {name!r}")
    if "base" in given:  # a polygon under a prism
        given["base"] = shape_from_spec(given["base"])
    if "body" in given:  # shapes are nested in an exterior
        given["body"] = _bodies(given["body"])
    made = shape(**given)
    if not isinstance(split, Mapping):
        raise GeometryError(f"split must be a table of fractions by piece, got {split!r}")
    if not isinstance(names, Mapping):
        raise GeometryError(f"names must be a table of new names by piece, got {names!r}")
    made = made.split(**{str(name): values for name, values in split.items()}) if split else made
    return made.renamed(**{str(old): new for old, new in names.items()}) if names else made


def _bodies(spec: Any) -> Shape | list[Shape]:
    """Return the shapes of the bodies of an exterior, which are no exteriors themselves."""
    specs = spec if isinstance(spec, list) else [spec]
    if any(isinstance(one, Mapping) and "body" in one for one in specs):
        raise GeometryError("the body of an exterior must be a bounded shape, got another exterior")
    shapes = [shape_from_spec(one) for one in specs]
    return shapes if isinstance(spec, list) else shapes[0]


def _plain(value: Any) -> Any:
    """Return nested tuples as nested lists, shapes as their specifications."""
    if isinstance(value, Shape):
        return shape_to_spec(value)
    return [_plain(item) for item in value] if isinstance(value, tuple) else value
