"""Features that failing cases share and passing cases lack.

Score of a feature: (a/F)^2 - b/(2 P), where a of F failing and b of P passing cases have it. A failing case
without the feature speaks against it more than a passing case with it: where one mistake is at work, every
failing case must touch it, but a case may touch it and not show it. Beside the score stands Fisher's exact
probability (one-sided) of so uneven a split if the feature had nothing to do with failing,

    p = sum_{k >= a} C(a + b, k) C(F + P - a - b, F - k) / C(F + P, F).

Where p is above 0.02, so few cases tell little, and the score is multiplied by ln p / ln 0.02. Tags, which
are labels, count 0.7 times what features of the problem do. Where no feature stands out and at least half of
the cases fail, what every case uses is the suspect.

Two features together are named only if they separate the groups better than every single one. Features that
the same cases have cannot be told apart and are named together.

References
----------
Fisher 1922, "On the interpretation of chi-squared from contingency tables, and the calculation of P", J.
Royal Statistical Society 85, 87-94 (the test; from memory, unchecked).
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import combinations

from scipy.stats import hypergeom

from laplace_verify.diagnosis.finding import Finding, case_list, counted, listed
from laplace_verify.measure.results import Study

__all__ = ["feature_names", "shared_features"]

_LOWEST_SCORE = 0.3
_SHOWN = 0.1  # once chance is allowed for
_GAIN_OF_A_PAIR = 0.1
_LIMIT = 5
_SURPRISING = 0.02  # probability of a split by chance from which it counts in full
_SMOOTH = "tag smooth"  # where most is expected, any mistake shows: no cause
_SEVERAL = 3  # failing cases from which it is said that nothing sets them apart
_EVERYWHERE = 0.4
_LABEL = 0.7  # weight of tags


def feature_names(study: Study) -> frozenset[str]:
    """Return the features a study has, as words: true ones by name, others as "name: value".

    >>> from laplace_verify.measure.verdict import Verdict
    >>> features = {"Neumann condition": True, "tensor": False, "dimension": 2.0, "shape": "disc"}
    >>> study = Study(
    ...     solver="s", case_id="c", case_title="", verdict=Verdict.PASS, sizes=[], seed=0, features=features
    ... )
    >>> sorted(feature_names(study))
    ['Neumann condition', 'dimension: 2', 'shape: disc']
    """
    names = set()
    for name, value in study.features.items():
        if value is True and name != _SMOOTH:
            names.add(name)
        elif isinstance(value, str):
            names.add(f"{name}: {value}")
        elif isinstance(value, int | float) and not isinstance(value, bool):
            names.add(f"{name}: {value:g}")
    return frozenset(names)


def shared_features(
    bad: Sequence[Study], good: Sequence[Study], bad_word: str, good_word: str
) -> list[Finding]:
    """Return what sets the `bad` studies apart from the `good` ones, best first."""
    if not bad:
        return []
    if not good:
        return [_everywhere(bad, f"None of the cases is {good_word} to compare with", bad_word)]
    features = {id(study): feature_names(study) for study in (*bad, *good)}
    groups: dict[tuple[frozenset[int], frozenset[int]], list[str]] = {}
    for name in _in_order(bad):
        have_bad = frozenset(k for k, study in enumerate(bad) if name in features[id(study)])
        have_good = frozenset(k for k, study in enumerate(good) if name in features[id(study)])
        groups.setdefault((have_bad, have_good), []).append(name)
    groups = {key: _telling(names) for key, names in groups.items()}
    single = {key: _score(key, len(bad), len(good)) for key in groups}
    found = [
        (single[key], key, names, False) for key, names in groups.items() if single[key] >= _LOWEST_SCORE
    ]
    found += _pairs(groups, single, len(bad), len(good))
    found.sort(key=lambda entry: (-entry[0], entry[3], entry[2]))
    words = (bad_word, good_word)
    findings = [_finding(score, key, names, pair, bad, good, words) for score, key, names, pair in found]
    findings = [finding for finding in findings if finding.score >= _SHOWN][:_LIMIT]
    if len(bad) >= max(len(good), _SEVERAL) and not any(f.score >= _LOWEST_SCORE for f in findings):
        said = f"No feature sets the {bad_word} cases apart from the {good_word} ones"
        findings.insert(0, _everywhere(bad, said, bad_word))
    return findings


def _in_order(studies: Sequence[Study]) -> list[str]:
    """Return the features of the studies in the order in which they list them, general ones first."""
    listed_by = {name: place for study in studies for place, name in enumerate(study.features)}
    names: set[str] = set().union(*(feature_names(study) for study in studies))
    return sorted(names, key=lambda name: (listed_by.get(name, listed_by.get(name.split(":")[0], 0)), name))


_Key = tuple[frozenset[int], frozenset[int]]
_Found = tuple[float, _Key, list[str], bool]


def _score(key: _Key, bad: int, good: int) -> float:
    return (len(key[0]) / bad) ** 2 - len(key[1]) / (2 * good)


def _telling(names: list[str]) -> list[str]:
    """Leave out tags, which repeat features, where a feature says the same."""
    return [name for name in names if not name.startswith("tag ")] or names


def _pairs(groups: dict[_Key, list[str]], single: dict[_Key, float], bad: int, good: int) -> list[_Found]:
    """Return the two best pairs of features that separate better than every single feature does."""
    common = [key for key in groups if len(key[0]) >= 0.7 * bad and len(key[0]) > 1]
    least = max(max(single.values(), default=0.0) + _GAIN_OF_A_PAIR, _LOWEST_SCORE)
    best: dict[_Key, _Found] = {}
    for one, two in combinations(common, 2):
        both = (one[0] & two[0], one[1] & two[1])
        score = _score(both, bad, good)
        names = [groups[one][0], groups[two][0]]
        if both not in groups and score >= least and (both not in best or names < best[both][2]):
            best[both] = (score, both, names, True)
    return sorted(best.values(), key=lambda entry: (-entry[0], entry[2]))[:2]


def _finding(
    score: float,
    key: _Key,
    names: list[str],
    pair: bool,
    bad: Sequence[Study],
    good: Sequence[Study],
    words: tuple[str, str],
) -> Finding:
    """Put one feature, or one group of features that cannot be told apart, into words."""
    with_it = [bad[k] for k in sorted(key[0])]
    counts = f"{counted(len(key[0]), len(bad), f'{words[0]} cases')} {_have(len(key[0]), len(bad))}"
    others = counted(len(key[1]), len(good), words[1]) + (" too" if len(key[1]) == len(good) else "")
    text = f"{' together with '.join(names) if pair else names[0]}: {counts}, {others}"
    if not pair and len(names) > 1:
        text += f". The same cases have {listed(names[1:], 4)}: these cases cannot tell them apart"
    a, b = len(key[0]), len(key[1])
    chance = float(hypergeom.sf(a - 1, len(bad) + len(good), a + b, len(bad)))
    evidence = (
        f"({a}/{len(bad)})^2 - {b}/(2*{len(good)}) = {score:.2f}; "
        f"probability of so uneven a split by chance {chance:.2g}; "
        f"cases: {case_list(with_it)}"
    )
    if b:
        evidence += f"; {words[1]} with it: {case_list([good[k] for k in sorted(key[1])])}"
    weight = min(1.0, math.log(max(chance, 1e-300)) / math.log(_SURPRISING))
    if all(name.startswith("tag ") for name in names):
        weight *= _LABEL
    return Finding(text=text, evidence=evidence, score=weight * score, studies=tuple(with_it))


def _have(part: int, whole: int) -> str:
    return "has it" if whole == 1 or part == 1 else "have it"


def _everywhere(bad: Sequence[Study], said: str, bad_word: str) -> Finding:
    """Say that nothing can be set apart, so that what all cases use comes first."""
    common = sorted(frozenset.intersection(*(feature_names(study) for study in bad)))
    text = (
        f"{said}: look first at what every case uses "
        "(the equation inside, the reported h, the declared order, how the answer is handed back)"
    )
    evidence = f"{len(bad)} {bad_word}: {case_list(bad)}; all share: {listed(common, 8) or 'no feature'}"
    return Finding(text=text, evidence=evidence, score=_EVERYWHERE, studies=tuple(bad))
