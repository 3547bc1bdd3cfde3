"""The sample reports show a sound solver that passes and a faulty one that fails where it should."""

import re

import pytest

from laplace_verify.campaign.record import record_from_json
from laplace_verify.report import regenerate_reports
from laplace_verify.report.samples import CASES

pytestmark = pytest.mark.slow  # twice three studies and the laws, in processes of their own
FEW = ("rod-fixed-and-flux", "plate-saddle", "plate-flux-top")


@pytest.fixture(scope="module")
def folder(tmp_path_factory):
    """Return the folder of sample reports over a few of their cases."""
    folder = tmp_path_factory.mktemp("samples") / "reports"
    said = []
    written = regenerate_reports(folder, said.append, cases=FEW)
    assert len(said) == 2
    assert all(path.is_file() for path in written)
    return folder


def verdicts(path):
    return {study.case_id: study.verdict.value for study in record_from_json(path).studies}


def test_the_sound_solver_passes_and_the_faulty_one_fails_on_flux_data_in_the_plane(folder):
    assert verdicts(folder / "five-point" / "record.json") == dict.fromkeys(FEW, "PASS")
    faulty = verdicts(folder / "five-point-first-order-flux" / "record.json")
    # In a rod the solution is affine, and a one-sided difference is exact.
    assert faulty == {"rod-fixed-and-flux": "PASS", "plate-saddle": "PASS", "plate-flux-top": "FAIL"}


def test_every_link_of_the_index_leads_to_a_file(folder):
    links = re.findall(r"\]\(([^)]+)\)", (folder / "README.md").read_text(encoding="utf-8"))
    assert len(links) >= 5
    others = [link for link in links if link.startswith("seeded-faults/")]  # another command writes these
    assert others == ["seeded-faults/README.md", "seeded-faults/outcomes.csv"]
    assert all((folder / link).is_file() for link in links if link not in others)


def test_the_command_that_repeats_a_sample_names_its_cases(folder):
    record = record_from_json(folder / "five-point" / "record.json")
    assert record.command.endswith(f"five_point --cases {' '.join(FEW)}")
    assert set(FEW) <= set(CASES)
