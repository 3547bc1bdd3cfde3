"""Every Python block of the README runs as printed, in order; the commands it shows are understood."""

import re
import shlex
from pathlib import Path

import pytest

import laplace_verify as lv
from laplace_verify.cli import main
from laplace_verify.solvers.samples import FAULTS

ROOT = Path(__file__).parents[2]
TEXT = (ROOT / "README.md").read_text(encoding="utf-8")


def blocks(language):
    return re.findall(rf"^```{language}\n(.*?)^```", TEXT, re.S | re.M)


@pytest.fixture(scope="module")
def namespace():
    """Run the blocks in one namespace, as a reader would in a notebook."""
    pytest.importorskip("skfem")
    pytest.importorskip("fipy")
    names = {}
    for block in blocks("python"):
        exec(compile(block, "README.md", "exec"), names)
    return names


def test_the_examples_run_and_pass(namespace):
    assert namespace["study"].verdict == lv.Verdict.PASS, str(namespace["study"])
    assert namespace["solve"].name == "scikit-fem P1"
    assert namespace["pool"].problem.conductivity == 0.6


def test_the_first_paragraph_states_the_job():
    paragraph = TEXT.split("\n\n")[1]
    assert "solver of Laplace's equation" in paragraph
    assert not paragraph.startswith(("#", "-", "```"))


def test_the_first_two_shell_blocks_set_up_and_then_run_and_test():
    run, test = blocks("sh")[:2]
    assert "venv" in run
    assert "laplace-verify run" in run
    assert "venv" in test
    assert "pytest" in test


@pytest.mark.parametrize(
    "line", [line for line in "".join(blocks("sh")[4:]).splitlines() if line.startswith("laplace-verify ")]
)
def test_the_commands_on_the_catalogue_work(line, tmp_path, monkeypatch, capsys):
    monkeypatch.chdir(tmp_path)
    assert main(shlex.split(line)[1:]) == 0
    assert capsys.readouterr().out


def test_the_number_of_cases_is_right():
    assert f"\n{len(lv.catalogue)} cases:" in TEXT


def test_the_number_of_seeded_faults_is_right():
    assert f"mistakes ({len(FAULTS)} of them)" in TEXT


def test_every_link_within_the_repository_leads_somewhere():
    for target in re.findall(r"\]\((?!http)([^)#]+)\)", TEXT):
        assert (ROOT / target).exists(), target
