"""Hypothesis draws the types of this package by name."""

import tomllib
from importlib import import_module
from pathlib import Path

import pytest
from hypothesis import HealthCheck, find, given, settings
from hypothesis import strategies as st

import laplace_verify as lv
from laplace_verify.geometry import Shape
from laplace_verify.hypothesis_plugin import register

ONCE = settings(
    max_examples=20, deadline=None, database=None, derandomize=True, suppress_health_check=list(HealthCheck)
)


@pytest.fixture(scope="module", autouse=True)
def registered():
    """Do what Hypothesis does when it is imported, whether or not the package is installed."""
    register()


def test_the_entry_point_is_declared():
    project = tomllib.loads((Path(__file__).parents[1] / "pyproject.toml").read_text(encoding="utf-8"))[
        "project"
    ]
    module, _, name = project["entry-points"]["hypothesis"]["laplace_verify"].partition(":")
    assert getattr(import_module(module), name) is register


@pytest.mark.parametrize("kind", [lv.Field, lv.Case, lv.Problem, Shape])
def test_types_are_drawn(kind):
    @ONCE
    @given(st.from_type(kind))
    def drawn(thing):
        assert isinstance(thing, kind)

    drawn()


@pytest.mark.parametrize("shape", [lv.Interval, lv.Rectangle, lv.Polygon, lv.LShape, lv.Ball, lv.Cylinder])
def test_a_shape_is_of_its_own_class(shape):
    assert type(find(st.from_type(shape), lambda _: True, settings=ONCE)) is shape


def test_annotated_tests_are_filled_in():
    @ONCE
    @given(...)
    def solved(case: lv.Case, square: lv.Rectangle):
        assert case.exact.dim == case.problem.dim
        assert square.measure >= 1.0

    solved()
