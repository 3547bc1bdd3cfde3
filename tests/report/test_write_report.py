"""Every form of the report holds what the record says, escapes what the solver says, repeats to the byte."""

import csv
import json
import math
import os
import re
from dataclasses import replace
from html.parser import HTMLParser
from xml.etree import ElementTree

import matplotlib as mpl  # noqa: TID251  # its settings are what is checked
import pytest

from laplace_verify.campaign.record import record_from_json, record_to_json
from laplace_verify.errors import RecordError
from laplace_verify.report import FORMATS, write_report

VOID = {"meta", "br", "hr", "img", "link", "input"}


class Page(HTMLParser):
    """Collect tags, ids, links and text of a page, and check that every tag is closed in order."""

    def __init__(self, text):
        super().__init__()
        self.open, self.ids, self.links, self.tags, self.words, self.attributes = [], [], [], [], [], []
        self.feed(text)
        self.close()

    def handle_starttag(self, tag, attrs):
        self.tags.append(tag)
        self.attributes += [(tag, *pair) for pair in attrs]
        self.ids += [value for name, value in attrs if name == "id"]
        self.links += [value for name, value in attrs if name in ("href", "src", "xlink:href")]
        if tag not in VOID:
            self.open.append(tag)

    def handle_startendtag(self, tag, attrs):
        self.handle_starttag(tag, attrs)
        if tag not in VOID:
            self.open.pop()

    def handle_endtag(self, tag):
        assert self.open, f"</{tag}> closes nothing"
        assert self.open.pop() == tag

    def handle_data(self, data):
        self.words.append(data)


@pytest.fixture(scope="module")
def written(whole_record, tmp_path_factory):
    """Return the folder and the paths of the report of the whole record, written once for all tests."""
    folder = tmp_path_factory.mktemp("report") / "new" / "folder"
    return folder, write_report(whole_record, folder)


@pytest.fixture(scope="module")
def page(written):
    return Page(written[1]["html"].read_text(encoding="utf-8"))


@pytest.fixture
def short_record(record):
    """Return a record with the undecided and the broken study only: few figures, quickly drawn."""
    return replace(record, studies=record.studies[6:8])


def test_every_format_is_written_once_and_nothing_else_is_left(written):
    folder, paths = written
    assert tuple(paths) == FORMATS
    assert all(path.is_file() for path in paths.values())
    names = {
        "report.html",
        "report.md",
        "report.tex",
        "errors.csv",
        "record.json",
        "junit.xml",
        "figures.pdf",
    }
    assert set(os.listdir(folder)) == names


def test_same_record_same_bytes_whatever_the_users_settings(short_record, tmp_path):
    first = {name: path.read_bytes() for name, path in write_report(short_record, tmp_path / "a").items()}
    before = {key: value for key, value in mpl.rcParams.items() if key != "backend"}
    with mpl.rc_context({"font.size": 23, "svg.hashsalt": None, "lines.linewidth": 9}):
        second = {
            name: path.read_bytes() for name, path in write_report(short_record, tmp_path / "b").items()
        }
    assert first == second
    assert {key: value for key, value in mpl.rcParams.items() if key != "backend"} == before
    first_figures, second_figures = (tmp_path / name / "figures.pdf" for name in "ab")
    assert first_figures.read_bytes() == second_figures.read_bytes()


def test_report_can_be_written_again_from_its_json(record, written, tmp_path):
    _, paths = written
    again = write_report(record_from_json(paths["json"]), tmp_path, ["json", "html", "csv"])
    for name, path in again.items():
        assert paths[name].read_bytes() == path.read_bytes()
    assert paths["json"].read_bytes() == record_to_json(record)


def test_unknown_format_and_unwritable_folder_are_refused(record, tmp_path):
    with pytest.raises(RecordError, match=r"no report format 'htm'; did you mean 'html'"):
        write_report(record, tmp_path, ["htm"])
    (tmp_path / "file").write_text("in the way")
    with pytest.raises(RecordError, match=r"cannot make the report folder .*choose one you may write to"):
        write_report(record, tmp_path / "file" / "folder")


def test_html_is_well_formed_self_contained_and_without_script(page):
    assert page.open == []
    assert len(page.ids) == len(set(page.ids))
    assert {"script", "link", "img", "iframe", "object"}.isdisjoint(page.tags)
    for link in page.links:
        assert link.startswith(("#", "data:image/png;base64,"))
        assert not link.startswith("#") or link[1:] in page.ids
    for _, name, value in page.attributes:
        assert not name.startswith("on")
        for target in re.findall(r"url\(#([^)]+)\)", value or ""):
            assert target in page.ids


def test_html_escapes_what_the_solver_says(page):
    text = "".join(page.words)
    assert text.count("<script>alert('tide & \"sand\"')</script>") >= 4  # name, title, statement, reason


def test_code_keeps_its_blank_lines(short_record, tmp_path):
    short_record = replace(short_record, command="cd pool\n\n    laplace-verify run pool.py:solve")
    text = write_report(short_record, tmp_path, ["html"])["html"].read_text(encoding="utf-8")
    assert "<code>cd pool\n\n    laplace-verify run" in text
    assert "\n\n" not in re.sub(r"<pre>.*?</pre>", "code", text, flags=re.DOTALL)


def test_every_figure_has_a_title_and_words_for_those_who_cannot_see_it(page):
    figures = page.tags.count("svg")
    assert figures >= 8 * 2
    labelled = [value for tag, name, value in page.attributes if tag == "svg" and name == "aria-labelledby"]
    assert len(labelled) == figures
    assert all(part in page.ids for value in labelled for part in value.split())
    assert page.tags.count("desc") == figures


def test_every_table_has_a_caption_and_scoped_heads(page):
    scopes = [value for tag, name, value in page.attributes if tag == "th" and name == "scope"]
    assert len(scopes) == page.tags.count("th")
    assert set(scopes) == {"col", "row"}
    assert page.tags.count("caption") == page.tags.count("table")


def test_html_stands_alone(page):
    text = " ".join(" ".join(page.words).split())
    for words in (
        "It is not a validation",
        "Acceptance criteria, fixed before the run",
        "What was not exercised",
        "What harmonic problems can never exercise",
        "sources and volume terms",
        "Neumann condition: both failing cases have it, none of the 3 passing",
        "3 of 8 cases that ran pass, 3 fail (1 as declared), 1 is inconclusive and 1 breaks the solver.",
        "1 of 3 laws of harmonic functions is kept, 1 is broken.",
        "the declaration is out of date, remove it",
        "dimension 3 is beyond the declared {2}",
        "time limit reached",
        "max: only 3 levels can be judged; run a finer size, 128",
        "laplace-verify run pool.py:solve --seed 5 --sizes 8,16,32,64",
        "licensed practice",
        "1.02 [0.92, 1.12]",
        "n = 8 is not in the fit of max and L2",
    ):
        assert words in text, words
    for info in ("hot-plate", "dam-toe", "tidal-pool", "brine-tank", "duct"):
        assert f"case-{info}" in page.ids


def test_markdown_tables_keep_their_columns_whatever_a_name_holds(written):
    text = written[1]["md"].read_text(encoding="utf-8")
    lines = text.splitlines()
    rules = [k for k, line in enumerate(lines) if re.fullmatch(r"\|(:?-+:?\|)+", line)]
    assert len(rules) > 20
    for k in rules:
        width = lines[k].count("|")
        rows = [lines[k - 1]]
        for line in lines[k + 1 :]:
            if not line.startswith("|"):
                break
            rows.append(line)
        assert {len(re.findall(r"(?<!\\)\|", row)) for row in rows} == {width}
    assert "\\<script\\>" in text
    assert "<script>" not in re.sub(r"```.*?```", "", text, flags=re.DOTALL)
    assert "<svg" not in text


def test_latex_is_balanced_and_escaped(written):
    folder, paths = written
    text = paths["tex"].read_text(encoding="utf-8")
    depth = []
    for kind, name in re.findall(r"\\(begin|end)\{(\w+)\}", text):
        if kind == "begin":
            depth.append(name)
        else:
            assert depth.pop() == name
    assert depth == []
    assert "verbatim" in text  # the word of the name, with its backslash escaped
    assert r"\end{verbatim}" not in text
    plain = re.sub(r"\\[\\{}$&#%_]", "", text)
    assert plain.count("{") == plain.count("}")
    assert plain.count("$") % 2 == 0
    assert not re.search(r"[^\x00-\x7FÀ-ÿ]", text)
    pages = [int(page) for page in re.findall(r"\\includegraphics\[page=(\d+),[^]]*\]\{figures.pdf\}", text)]
    assert pages == list(range(1, len(pages) + 1))
    pdf = (folder / "figures.pdf").read_bytes()
    assert pdf.startswith(b"%PDF")
    assert len(re.findall(rb"/Type /Page\b", pdf)) == len(pages) > 8


def test_latex_tables_have_as_many_cells_as_columns(written):
    text = written[1]["tex"].read_text(encoding="utf-8")
    for body in re.findall(r"\\begin\{longtable\}.*?\n(.*?)\\end\{longtable\}", text, re.DOTALL):
        rows = [
            line
            for line in body.splitlines()
            if line.endswith(r"\\") and not line.startswith(r"\multicolumn")
        ]
        assert len({len(re.findall(r"(?<!\\)&", row)) for row in rows}) == 1


def test_csv_reads_back_to_the_same_numbers(record, written):
    with written[1]["csv"].open(newline="", encoding="utf-8") as file:
        rows = list(csv.DictReader(file))
    expected = {
        (study.case_id, str(level.size), norm): (
            error,
            level.relative[norm],
            level.h,
            study.orders[norm].observed,
        )
        for study in record.studies
        for level in study.levels
        for norm, error in level.errors.items()
    }
    found = {
        (row["case"], row["size"], row["norm"]): tuple(
            float(row[name]) for name in ("absolute", "relative", "h", "observed_order")
        )
        for row in rows
        if row["norm"]
    }
    assert found == expected
    assert {row["case"] for row in rows if not row["norm"]} == {"tidal-pool", "brine-tank", "duct"}


def test_junit_counts_and_reasons(written):
    root = ElementTree.parse(written[1]["junit"]).getroot()
    order, laws = root.findall("testsuite")
    totals = ("tests", "failures", "errors", "skipped")
    assert [order.get(name) for name in totals] == ["10", "4", "1", "3"]
    assert [laws.get(name) for name in totals] == ["3", "1", "0", "1"]
    cases = {case.get("name"): case for case in order}
    assert cases["hot-plate"].find("*") is None
    assert "observed 1.02" in cases["insulated-plate"].find("failure").get("message")
    assert cases["dam-toe"].find("failure").get("message").startswith("inconclusive: ")
    assert "<script>" in cases["tidal-pool"].find("error").get("message")
    assert cases["brine-tank"].find("skipped").get("message") == "dimension 3 is beyond the declared {2}"
    assert "accepted deviation" in cases["old-plate"].find("skipped").get("message")
    assert "remove the declaration" in cases["repaired-plate"].find("failure").get("message")


def test_control_characters_do_not_break_any_format(short_record, tmp_path):
    broken = short_record.studies[1]
    broken.reasons[0] = "bell \x07 null \x00 escape \x1b[31m lone \ud800 end"
    paths = write_report(short_record, tmp_path, ["html", "md", "tex", "junit"])
    ElementTree.parse(paths["junit"])
    for path in paths.values():
        assert not re.search(r"[\x00-\x08\x0b\x0c\x0e-\x1f]", path.read_text(encoding="utf-8"))


def test_absent_and_infinite_numbers_are_said_in_words(record, tmp_path):
    plain = json.loads(record_to_json(replace(record, studies=record.studies[:1])))
    level = plain["studies"][0]["levels"][1]
    level["errors"]["max"] = {"number": "nan"}
    level["errors"]["L2"] = {"number": "inf"}
    plain["studies"][0]["orders"]["max"].update(observed=None, low=None, high=None, pairs=[None, None, None])
    changed = record_from_json(json.dumps(plain).encode())
    assert math.isnan(changed.studies[0].levels[1].errors["max"])
    text = write_report(changed, tmp_path, ["html"])["html"].read_text(encoding="utf-8")
    assert "not a number" in text
    assert "∞" in text


def test_an_empty_record_still_makes_a_report(record, tmp_path):
    plain = json.loads(record_to_json(record)) | {"studies": [], "checks": [], "cases": []}
    paths = write_report(record_from_json(json.dumps(plain).encode()), tmp_path)
    assert "Nothing was run." in paths["html"].read_text(encoding="utf-8")


def test_a_broken_law_has_its_picture_in_every_form_that_shows_pictures(written):
    folder, _ = written
    assert "law-maximum-principle" in (folder / "report.html").read_text(encoding="utf-8")
    assert "The simplest problem found that breaks the law" in (folder / "report.tex").read_text(
        encoding="utf-8"
    )
