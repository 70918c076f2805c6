"""The README's example prints what the README says."""

import re
import subprocess
import sys
from pathlib import Path

README = Path(__file__).parents[2] / "README.md"


def block(mark: str) -> str:
    found = re.search(rf"<!-- {mark} -->\n```\w*\n(.*?)```", README.read_text(encoding="utf-8"), re.S)
    assert found, mark
    return found[1]


def test_the_example_prints_its_answer_and_writes_its_sheet(tmp_path):
    run = subprocess.run(
        [sys.executable, "-c", block("example")],
        cwd=tmp_path,
        capture_output=True,
        text=True,
        encoding="utf-8",
        check=False,
    )
    assert run.returncode == 0, run.stderr
    assert run.stdout == block("printed")
    assert (tmp_path / "loop.html").stat().st_size > 20_000


def test_the_page_opens_with_the_job_in_one_paragraph():
    head, first, second, *_ = README.read_text(encoding="utf-8").split("\n\n")
    assert head == "# pipeflex"
    assert "piping engineer" in first
    assert second.startswith(("![", "## "))
