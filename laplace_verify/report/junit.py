"""The verdicts as JUnit XML, which continuous integration servers read.

One ``testcase`` a study and a law. FAIL and INCONCLUSIVE are failures, ERROR is an error, NOT_APPLICABLE
and NOT_RUN are skipped; each with its reason. A study that deviates as its author declared is skipped too,
and says so; one that passes against the declaration is a failure, so that the declaration gets removed.
"""

from __future__ import annotations

from xml.etree import ElementTree

from laplace_verify.campaign.record import Record
from laplace_verify.measure.results import Study
from laplace_verify.measure.verdict import Verdict
from laplace_verify.principles.results import Check
from laplace_verify.report.text import VERDICT_WORDS, accepted, main_reason, number, printable

__all__ = ["to_junit"]

_ELEMENTS = {
    Verdict.FAIL: "failure",
    Verdict.INCONCLUSIVE: "failure",
    Verdict.ERROR: "error",
    Verdict.NOT_APPLICABLE: "skipped",
    Verdict.NOT_RUN: "skipped",
}


def to_junit(record: Record) -> bytes:
    """Return the XML document, UTF-8."""
    root = ElementTree.Element("testsuites", name="laplace-verify")
    studies = [_study(record, study) for study in record.studies]
    _suite(root, "order", record, studies)
    _suite(root, "principles", record, [_check(record, check) for check in record.checks])
    ElementTree.indent(root)
    data: bytes = ElementTree.tostring(root, encoding="utf-8", xml_declaration=True)
    return data + b"\n"


def _suite(root: ElementTree.Element, name: str, record: Record, cases: list[ElementTree.Element]) -> None:
    """Add one suite with its totals."""
    totals = {
        kind: sum(case.find(kind) is not None for case in cases) for kind in ("failure", "error", "skipped")
    }
    suite = ElementTree.SubElement(
        root,
        "testsuite",
        name=printable(f"{record.solver.name}: {name}"),
        tests=str(len(cases)),
        failures=str(totals["failure"]),
        errors=str(totals["error"]),
        skipped=str(totals["skipped"]),
        time=f"{sum(float(case.get('time', '0')) for case in cases):.3f}",
    )
    if record.started:
        suite.set("timestamp", printable(record.started))
    suite.extend(cases)


def _study(record: Record, study: Study) -> ElementTree.Element:
    time = sum(level.seconds for level in study.levels)
    element = _element(record, "order", study.case_id, time)
    text = "\n".join([*study.reasons, *(f"remark: {remark}" for remark in study.remarks)])
    if accepted(study):
        message = printable(f"accepted deviation: {study.known}")
        ElementTree.SubElement(element, "skipped", message=message).text = printable(text)
        return element
    if study.known is not None and study.verdict is Verdict.PASS:
        message = printable(
            f"passes, but is declared a known deviation ({study.known}): remove the declaration"
        )
        ElementTree.SubElement(element, "failure", message=message, type="PASS").text = printable(text)
        return element
    _outcome(element, study.verdict, main_reason(study), text)
    return element


def _check(record: Record, check: Check) -> ElementTree.Element:
    element = _element(record, "principles", check.law, 0.0)
    size = f"largest violation {number(check.violation)}, tolerance {number(check.tolerance)}"
    text = "\n".join(part for part in (check.reason, size, check.example) if part)
    _outcome(element, check.verdict, check.reason or VERDICT_WORDS[check.verdict], text)
    return element


def _element(record: Record, group: str, name: str, time: float) -> ElementTree.Element:
    return ElementTree.Element(
        "testcase",
        classname=printable(f"{record.solver.name}.{group}"),
        name=printable(name),
        time=f"{time:.3f}",
    )


def _outcome(element: ElementTree.Element, verdict: Verdict, message: str, text: str) -> None:
    """Add what a verdict other than PASS means to the server."""
    kind = _ELEMENTS.get(verdict)
    if kind is not None:
        message = f"{VERDICT_WORDS[verdict]}: {message}" if verdict is Verdict.INCONCLUSIVE else message
        ElementTree.SubElement(element, kind, message=printable(message), type=verdict.name).text = printable(
            text
        )
