"""What the README shows is what the program prints."""

from __future__ import annotations

import re
import subprocess
import sys
from pathlib import Path

ROOT = Path(__file__).parents[2]
README = (ROOT / "README.md").read_text("utf-8")


def test_the_number_traced_is_what_the_command_prints() -> None:
    block = re.search(r"```console\n\$ headtrace (.+?) \| head -n (\d+)\n(.*?)```", README, re.DOTALL)
    assert block is not None
    call, count, shown = block.groups()
    ran = subprocess.run(
        [sys.executable, "-m", "calc", *call.split()],
        cwd=ROOT,
        capture_output=True,
        text=True,
        encoding="utf-8",
        check=True,
    )
    assert "".join(line + "\n" for line in ran.stdout.splitlines()[: int(count)]) == shown


def test_the_smallest_project_solves(tmp_path: Path) -> None:
    block = re.search(r"```yaml\n(reservoirs:.*?)```", README, re.DOTALL)
    assert block is not None
    (tmp_path / "network.yaml").write_text(block[1], "utf-8")
    ran = subprocess.run(
        [sys.executable, "-m", "calc", "solve", str(tmp_path)],
        capture_output=True,
        text=True,
        encoding="utf-8",
        check=False,
    )
    assert (ran.returncode, ran.stderr) == (0, "")


def test_every_command_named_is_one_that_the_program_has() -> None:
    named = set(re.findall(r"^\| `headtrace (\w+)", README, re.MULTILINE)) | {"schema", "ready"}
    ran = subprocess.run(
        [sys.executable, "-m", "calc", "--help"], capture_output=True, text=True, encoding="utf-8", check=True
    )
    assert named == {name for name in named if re.search(rf"\b{name}\b", ran.stdout)}


def test_the_picture_is_there() -> None:
    for target in re.findall(r"!\[[^\]]+\]\(([^)]+)\)", README):
        assert (ROOT / target).is_file(), target
