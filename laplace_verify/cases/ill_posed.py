"""Problems without a solution, or with several: what a solver should refuse, not answer.

Three flaws of the data, each in several dimensions:

- fluxes on the whole boundary that do not add up to zero (divergence theorem);
- a Robin coefficient alpha < 0 at an eigenvalue of Steklov's problem n . K grad u = -alpha u: then some u
  other than 0 satisfies all conditions without data, and with data that it does not balance there is no
  solution;
- a side on which nothing is prescribed.

Reading: an amplifying surface (alpha < 0) gives off the more heat the colder it is.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace
from math import pi, tanh

from laplace_verify.cases.definition import HERE, Family
from laplace_verify.cases.statement import posed_in_words
from laplace_verify.cases.tags import derived_tags
from laplace_verify.geometry import Box, Disc, Interval, Rectangle, Shape
from laplace_verify.problems import Case, Condition, dirichlet, ill_posed_case, neumann, problem, robin

__all__ = ["family"]

family = Family()
KELLOGG = "Kellogg 1929, Foundations of Potential Theory, ch. XI (Neumann's problem; from memory, unchecked)"
STEKLOV = "Stekloff 1902, Ann. Sci. ENS 19, 191-259 (the eigenvalue problem; from memory, unchecked)"


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class IllPosedDefinition:
    """An ill-posed case before it is built: arguments of `problems.problem`, and words."""

    title: str
    why: str
    reading: str
    shape: Shape
    conditions: Mapping[str, Condition]
    conductivity: float = 1.0
    sources: Iterable[str] = (HERE,)

    def build(self, id_: str) -> Case:
        """Return the case; its statement says why it is ill-posed."""
        posed = problem(self.shape, self.conditions, self.conductivity, name=id_, ill_posed=self.why)
        built = ill_posed_case(posed, title=self.title, reading=self.reading, sources=self.sources)
        return replace(
            built,
            statement=f"{posed_in_words(built)}. Ill-posed: {self.why}.",
            tags=derived_tags(built),
        )


@family
def _rod_unbalanced_flux() -> IllPosedDefinition:
    return IllPosedDefinition(
        title="Rod heated at both ends",
        why="heat enters at both ends and leaves nowhere, so that there is no steady state",
        reading="A rail clamped between two heaters by mistake; the drawing asked for a heater and a cooler.",
        shape=Interval(0.2, 1.7),
        conditions={"left": neumann(0.5), "right": neumann(0.75)},
        conductivity=2.5,
        sources=(KELLOGG,),
    )


@family
def _plate_unbalanced_flux() -> IllPosedDefinition:
    return IllPosedDefinition(
        title="Plate with more flux in than out",
        why="the fluxes over the four sides add up to 0.16, not to 0",
        reading="A settling basin whose discharge was measured one tenth too low.",
        shape=Rectangle((0, 0), (1.6, 0.9)),
        conditions={
            "left": neumann(0), "right": neumann(0), "top": neumann("x + 0.2"), "bottom": neumann(-0.9),
        },
        conductivity=0.8,
        sources=(KELLOGG,),
    )  # fmt: skip


@family
def _disc_unbalanced_flux() -> IllPosedDefinition:
    return IllPosedDefinition(
        title="Disc with a net flux through its rim",
        why="the flux over the rim adds up to its mean 0.25 times the length of the rim, not to 0",
        reading="A round tank that is drained along its whole rim and filled nowhere.",
        shape=Disc((0.3, -0.2), 1.2),
        conditions={"rim": neumann("x - 0.05")},
        sources=(KELLOGG,),
    )


@family
def _box_unbalanced_flux() -> IllPosedDefinition:
    walls = {name: neumann(0) for name in ("left", "right", "front", "back")}
    return IllPosedDefinition(
        title="Box fed through its floor and closed elsewhere",
        why="the flux through the floor leaves nowhere",
        reading="A cellar pumped from below whose drain was left out of the model.",
        shape=Box((0, 0, 0), (1.2, 1.0, 0.8)),
        conditions={**walls, "bottom": neumann("0.5 + 0.1*x"), "top": neumann(0)},
        sources=(KELLOGG,),
    )


@family
def _rod_amplifying_end() -> IllPosedDefinition:
    return IllPosedDefinition(
        title="Rod with an amplifying end at its eigenvalue",
        why="u = x - 0.5 satisfies both conditions without data, so that with these there is no solution",
        reading="A controller wired backwards: it heats the end of a rod the more the hotter it is.",
        shape=Interval(0.5, 2.5),
        conditions={"left": dirichlet(0), "right": robin(-0.75, 1)},
        conductivity=1.5,  # K u' + alpha u = 1.5 - 0.75 * 2 = 0
        sources=(STEKLOV,),
    )


@family
def _plate_amplifying_top() -> IllPosedDefinition:
    width, height, k = 2.0, 0.7, 1.3
    wave = pi / width
    return IllPosedDefinition(
        title="Plate with an amplifying top at an eigenvalue",
        why="u = cos(pi x/2) sinh(pi y/2) satisfies all conditions without data, and these do not balance it",
        reading="A membrane on springs that push instead of pull, just stiff enough to buckle.",
        shape=Rectangle((0, 0), (width, height)),
        conditions={
            "bottom": dirichlet(0), "left": neumann(0), "right": neumann(0),
            "top": robin(-k * wave / tanh(wave * height), "1 - x"),
        },
        conductivity=k,
        sources=(STEKLOV,),
    )  # fmt: skip


@family
def _disc_amplifying_rim() -> IllPosedDefinition:
    return IllPosedDefinition(
        title="Disc with an amplifying rim at an eigenvalue",
        why="u = x satisfies the condition without data, and these do not balance it",
        reading="A round plate whose rim is heated in proportion to its own temperature.",
        shape=Disc((0, 0), 1.25),
        conditions={"rim": robin(-0.8, "x")},  # du/dr = u/R for u = r cos(theta)
        sources=(STEKLOV,),
    )


@family
def _plate_side_left_open() -> IllPosedDefinition:
    return IllPosedDefinition(
        title="Plate with a side left open",
        why="nothing is prescribed on the right side, so that there is a solution for every choice there",
        reading="A wall panel whose cold side was forgotten when the conditions were typed in.",
        shape=Rectangle((0, 0), (1.4, 1.0)),
        conditions={"left": dirichlet(1), "bottom": dirichlet("1 - x"), "top": neumann(0)},
    )


@family
def _box_face_left_open() -> IllPosedDefinition:
    walls = {name: neumann(0) for name in ("left", "right", "front", "back")}
    return IllPosedDefinition(
        title="Box with a face left open",
        why="nothing is prescribed on the top, so that there is a solution for every choice there",
        reading="A block of soil whose surface was given no condition.",
        shape=Box((0, 0, 0), (1, 0.8, 0.6)),
        conditions={**walls, "bottom": dirichlet("x")},
        conductivity=0.3,
    )
