"""The named cases: a mapping from ids to cases that are built when first asked for."""

from __future__ import annotations

from collections.abc import Callable, Collection, Iterable, Iterator, Mapping
from functools import partial
from pathlib import Path

from laplace_verify.cases.families import FAMILIES
from laplace_verify.errors import ProblemError, RecordError, UnknownCaseError, nearest_names
from laplace_verify.geometry.spec import SHAPES
from laplace_verify.problems import Case, case_from_json, random_case
from laplace_verify.problems.coordinates import COORDINATES

__all__ = ["Catalogue", "catalogue"]

Builder = Callable[[], Case]

CONDITIONS = ("dirichlet", "neumann", "robin", "periodic", "axis")


class Catalogue(Mapping[str, Case]):
    """Cases by id, in a stable order.

    Parameters
    ----------
    builders
        Id -> function that builds the case. Each is called once, when its case is first asked for.

    Examples
    --------
    >>> catalogue["plate-saddle"].exact.formula
    'Re (x + i y)^2'
    >>> [case.id for case in catalogue.select(dim=1, conditions={"neumann"}, ill_posed=False)]
    ['rod-pure-flux', 'pipe-pure-flux']
    """

    def __init__(self, builders: Mapping[str, Builder]) -> None:
        self._builders = dict(builders)
        self._built: dict[str, Case] = {}

    def __getitem__(self, id_: str) -> Case:
        """Return the case of an id.

        Raises
        ------
        UnknownCaseError
            If there is none; the nearest ids are named.
        """
        if not isinstance(id_, str):
            raise UnknownCaseError(
                f"a case is asked for by its id, a text such as 'plate-saddle', got {id_!r}"
            )
        if id_ not in self._built:
            if id_ not in self._builders:
                raise UnknownCaseError(f"no case is called {id_!r}; {nearest_names(str(id_), self)}")
            self._built[id_] = self._builders[id_]()
        return self._built[id_]

    def __contains__(self, id_: object) -> bool:
        """Return whether there is a case of this id, without building it."""
        return id_ in self._builders

    def __iter__(self) -> Iterator[str]:
        """Iterate over the ids."""
        return iter(self._builders)

    def __len__(self) -> int:
        """Return the number of cases."""
        return len(self._builders)

    def __repr__(self) -> str:
        """Show the number of cases."""
        return f"Catalogue({len(self)} cases)"

    def select(
        self,
        *,
        dim: int | None = None,
        shape: str | None = None,
        conditions: Iterable[str] | None = None,
        tags: Iterable[str] | None = None,
        coordinates: str | None = None,
        ill_posed: bool | None = None,
    ) -> list[Case]:
        """Return the cases that match, in order.

        Parameters
        ----------
        dim
            Number of space dimensions.
        shape
            Kind of shape; "polygon" matches rectangles and L-shapes too, "ellipse" discs.
        conditions
            What a solver can do: a case matches if all conditions it uses are among them.
        tags
            A case matches if it has all of them.
        coordinates
            "cartesian", "axisymmetric", "radial-cylinder" or "radial-sphere"; None: whatever they are.
        ill_posed
            True: only problems without a solution or with several; False: only those with one; None: all.

        Raises
        ------
        ProblemError
            If a shape, condition, tag or kind of coordinates is unknown (the nearest are named), `dim` is not
            1, 2 or 3, or a string stands where a set of words is needed.

        Examples
        --------
        >>> found = catalogue.select(dim=3, shape="box", conditions={"neumann"}, ill_posed=False)
        >>> [case.id for case in found]
        ['box-pure-flux']
        """
        if coordinates is not None and coordinates not in COORDINATES:
            raise ProblemError(
                f"unknown coordinates {coordinates!r}; {nearest_names(str(coordinates), COORDINATES)}"
            )
        can, wanted = _words(conditions, "conditions"), _words(tags, "tags")
        if dim is not None and dim not in (1, 2, 3):
            raise ProblemError(f"dim must be 1, 2 or 3, got {dim!r}")
        if ill_posed not in (None, True, False):
            raise ProblemError(f"ill_posed must be True, False or None, got {ill_posed!r}")
        _check_known(() if shape is None else (shape,), SHAPES, "shape")
        _check_known(can or (), CONDITIONS, "condition")
        if wanted:
            _check_known(wanted, frozenset().union(*(case.tags for case in self.values())), "tag")
        return [
            case
            for case in self.values()
            if (dim is None or case.dim == dim)
            and (shape is None or case.problem.shape.is_a(shape))
            and (can is None or case.conditions <= can)
            and (wanted is None or wanted <= case.tags)
            and (coordinates is None or coordinates == case.problem.coordinates)
            and (ill_posed is None or ill_posed == (case.problem.ill_posed is not None))
        ]

    @staticmethod
    def random(
        seed: int,
        dim: int = 2,
        shapes: Collection[str] | None = None,
        conditions: Collection[str] | None = None,
        tensor: bool = False,
    ) -> Case:
        """Return a random smooth case; see `problems.random_case` for the arguments.

        >>> catalogue.random(3, dim=1).dim
        1
        """
        return random_case(seed, dim, shapes, conditions, tensor)

    def with_folder(self, path: Path | str) -> Catalogue:
        """Return a catalogue with the cases of a folder added, one JSON file a case.

        Files are read in the order of their names, and checked at once. PROVENANCE.json is passed over.

        Raises
        ------
        RecordError
            If `path` is no path, there is no such folder, it holds no case, or a file is no sound case; it is
            named.
        ProblemError
            If an id is taken.
        """
        if not isinstance(path, str | Path):
            raise RecordError(f"a folder is named by a path, got {path!r}")
        folder = Path(path)
        files = sorted(file for file in folder.glob("*.json") if file.name != "PROVENANCE.json")
        if not files:
            missing = "there is no such folder" if not folder.is_dir() else "it holds no file *.json"
            raise RecordError(f"no cases in {folder}: {missing}; each case is one JSON file")
        builders = dict(self._builders)
        origin: dict[str, str] = {}
        for file in files:
            case = _read(file)
            if case.id in builders:
                taken = origin.get(case.id, "the catalogue")
                raise ProblemError(
                    f"{file.name}: the id {case.id!r} is taken by {taken}; every id must be unique, rename it"
                )
            builders[case.id], origin[case.id] = partial(_same, case), file.name
        return Catalogue(builders)


def _same(case: Case) -> Case:
    """Return a case that is built already."""
    return case


def _read(file: Path) -> Case:
    """Read one case file."""
    try:
        content = file.read_bytes()
    except OSError as cause:
        raise RecordError(f"{file.name} cannot be read: {cause}") from cause
    return case_from_json(content, file.name)


def _check_known(words: Iterable[str], known: Iterable[str], name: str) -> None:
    """Refuse a word that no case can match: a slip of the pen would select nothing without a word."""
    known = list(known)
    for word in words:
        if word not in known:
            raise ProblemError(f"there is no {name} {word!r}; {nearest_names(str(word), known)}")


def _words(words: Iterable[str] | None, name: str) -> frozenset[str] | None:
    """Return a set of words, refusing a single string: its letters are no words."""
    if words is None:
        return None
    if isinstance(words, str):
        raise ProblemError(f"{name} must be a set of words such as {{{words!r}}}, got the string {words!r}")
    return frozenset(words)


def _build(id_: str) -> Case:
    """Build a case of the package."""
    return FAMILIES[id_]().build(id_)


catalogue = Catalogue({id_: partial(_build, id_) for id_ in FAMILIES})
