"""The shipped tables, and whether this machine is ready."""

from __future__ import annotations

import ctypes
import re
import shutil
import sys
import tempfile
from collections.abc import Callable
from dataclasses import replace
from importlib import metadata
from pathlib import Path

import pytest
import yaml

from calc import __file__ as package
from calc import verification
from calc.cli import mending, readiness
from calc.problems import StorageError
from calc.publish import places

Inside = Callable[..., tuple[int, str, str]]
DATA = Path(package).parent / "data"


def test_tables_are_named(inside: Inside) -> None:
    status, said, remarks = inside("tables")
    assert (status, remarks) == (0, "")
    named = [line.split()[0] for line in said.splitlines()]
    assert named[:7] == ["fittings", "ends", "defaults", "roughness", "hazen-williams", "manning", "pipes"]
    sizes = yaml.safe_load((DATA / "sizes.yaml").read_text(encoding="utf-8"))["standards"]
    assert named[7:] == [name.lower().replace(" ", "-") for name in sizes]


TABLES = [
    ("fittings", "fittings.yaml", "fittings", "K"),
    ("ends", "fittings.yaml", "ends", "entry"),
    ("roughness", "materials.yaml", "roughness", "value"),
    ("hazen-williams", "materials.yaml", "hazen-williams", "value"),
    ("manning", "materials.yaml", "manning", "value"),
]


@pytest.mark.parametrize(("name", "file", "key", "forward"), TABLES)
def test_a_table_says_every_value_with_source_and_place(
    inside: Inside, name: str, file: str, key: str, forward: str
) -> None:
    status, said, _ = inside("tables", name)
    assert status == 0
    assert all(len(line) <= 120 for line in said.splitlines())
    text = (DATA / file).read_text(encoding="utf-8")
    assert f"calc/data/{file}" in said
    told = yaml.safe_load(text)
    rows = {line.split()[0]: line for line in said.splitlines()[3:] if line.strip()}
    lines = text.splitlines()
    for kind, entry in told[key].items():
        assert float(rows[kind].split()[1]) == float(str(entry[forward]).split()[0])
        place_line, place_column = rows[kind].split()[-1].split(":")
        assert lines[int(place_line) - 1][int(place_column) - 1 :].startswith(rows[kind].split()[1])
        source = rows[kind].split()[-2]
        assert source == entry["source"]
        assert " ".join(told["sources"][source].split()[:4]) in said


@pytest.mark.parametrize("name", ["pipes", "en-545", "ISO 4427", "iso-1452", "asme-b36.10m", "awwa-c151", "AWWA C900"])
def test_a_standard_says_every_row_with_its_line(inside: Inside, name: str) -> None:
    status, said, _ = inside("tables", name)
    assert status == 0
    assert all(len(line) <= 120 for line in said.splitlines())
    if name == "pipes":
        return
    text = (DATA / "sizes.yaml").read_text(encoding="utf-8")
    told = {key.lower().replace(" ", "-"): one for key, one in yaml.safe_load(text)["standards"].items()}
    standard = told[name.lower().replace(" ", "-")]
    lines = text.splitlines()
    for size, row in standard["sizes"].items():
        shown = next(line for line in said.splitlines() if re.match(rf"{re.escape(size)}(,| {{2,}})", line))
        cells = shown.replace("*", "").split()
        for written in (row["outside_diameter"], row["lining"], *row["wall"].values()):
            number, unit = written.split()
            assert number in cells
            assert f"Dimensions are in {unit}." in said.replace("\n", " ")
        assert lines[int(shown.split()[-1]) - 1].startswith(f"      {size}:")
    for key, entry in standard["classes"].items():
        shown = next(line for line in said.splitlines() if line.startswith(f"{key}  "))
        assert entry.get("pressure_rating", "") in shown


def test_defaults_are_said(inside: Inside) -> None:
    said = inside("tables", "defaults")[1]
    assert "site.gravity" in said
    assert "9.80665 m/s²" in said  # standard gravity, CGPM 1901


def test_this_machine_is_ready(inside: Inside) -> None:
    status, said, remarks = inside("ready")
    assert (status, remarks) == (0, "")
    assert said.splitlines()[-1].endswith("this machine is ready")
    assert re.search(r"yes +Pango +libpango\S+, 1\.[0-9]+\.[0-9]+\n", said)
    assert f"all {len(verification.run())}\n" in said
    assert "To mend it" not in said
    assert f"   {metadata.version('weasyprint')}\n" in said
    assert "NO" not in said.split()


def test_what_is_lacking_is_named(inside: Inside, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def no_library(name: str) -> None:
        raise OSError(name)

    def no_fonts() -> Path:
        raise StorageError("the fonts are missing from this installation; install headtrace again")

    def version(name: str) -> str:
        if name == "pint":
            raise metadata.PackageNotFoundError(name)
        return {"numpy": "1.26.4", "weasyprint": "70.1"}.get(name, honest(name))

    honest = metadata.version
    monkeypatch.setattr(ctypes, "CDLL", no_library)
    monkeypatch.setattr(places, "fonts", no_fonts)
    monkeypatch.setattr(readiness.metadata, "version", version)
    monkeypatch.setattr(tempfile, "tempdir", str(tmp_path / "gone"))
    status, said, remarks = inside("ready")
    assert status == 5
    for what in ("Pango", "Fontconfig", "typefaces", "pint>=0.24", "numpy>=2.0", "weasyprint==70.0", "temporary files"):
        assert what in remarks
    assert "scipy" not in remarks
    assert "not installed" in said
    assert "NO    numpy>=2.0" in said


def no_library(name: str) -> None:
    raise OSError(name)


@pytest.mark.parametrize(
    ("root", "present", "line"),
    [
        (True, ("apt-get", "sudo"), "apt-get update && apt-get install -y {apt}"),
        (False, ("apt-get", "sudo"), "sudo apt-get update && sudo apt-get install -y {apt}"),
        (False, ("apt-get",), "su -c 'apt-get update && apt-get install -y {apt}'"),
        (False, ("dnf", "sudo"), "sudo dnf install -y pango glib2 harfbuzz fontconfig"),
        (False, ("brew", "sudo"), "brew install pango glib harfbuzz fontconfig"),
        (True, ("pacman",), "pacman -S --noconfirm pango glib2 harfbuzz fontconfig"),
        (True, (), "install Pango, Pango for fonts, GObject, HarfBuzz, HarfBuzz for subsets, Fontconfig by the means"),
    ],
)
def test_libraries_are_mended_by_the_system(
    inside: Inside,
    monkeypatch: pytest.MonkeyPatch,
    root: bool,  # noqa: FBT001 - a parameter of the test
    present: tuple[str, ...],
    line: str,
) -> None:
    monkeypatch.setattr(ctypes, "CDLL", no_library)
    monkeypatch.setattr(mending.os, "geteuid", lambda: 0 if root else 1000)
    monkeypatch.setattr(mending.shutil, "which", lambda name: f"/usr/bin/{name}" if name in present else None)
    status, said, _ = inside("ready")
    assert status == 5
    apt = "libpango-1.0-0 libpangoft2-1.0-0 libglib2.0-0 libharfbuzz0b libharfbuzz-subset0 libfontconfig1"
    mends = said.partition("To mend it:\n")[2].splitlines()
    assert len(mends) == 1
    assert mends[0].strip().startswith(line.format(apt=apt))


def test_packages_fonts_and_room_have_lines_of_their_own(
    inside: Inside, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    honest = metadata.version
    monkeypatch.setattr(readiness.metadata, "version", lambda name: "1.26.4" if name == "numpy" else honest(name))
    fonts = tmp_path / "fonts"
    shutil.copytree(places.fonts(), fonts)
    (fonts / "LedgerText-Regular.ttf").write_bytes(b"altered")
    monkeypatch.setattr(places, "fonts", lambda: fonts)
    monkeypatch.setattr(tempfile, "tempdir", str(tmp_path / "gone"))
    status, said, _ = inside("ready")
    assert status == 5
    pip, again, room = (line.strip() for line in said.partition("To mend it:\n")[2].splitlines())
    assert pip == f"{sys.executable} -m pip install 'numpy>=2.0'"
    assert again == f"{sys.executable} -m pip install --editable {Path(__file__).resolve().parents[2]}"
    assert room.startswith("export TMPDIR=")
    assert "LedgerText-Regular.ttf is missing or altered" in said


def test_a_machine_that_computes_wrong_is_not_ready(inside: Inside, monkeypatch: pytest.MonkeyPatch) -> None:
    first, *rest = verification.run()
    wrong = replace(first, got=first.got * 1.01)
    monkeypatch.setattr(verification, "run", lambda: (wrong, *rest))
    status, said, remarks = inside("ready")
    assert status == 4
    assert f"1 of {len(rest) + 1} are not: {wrong.id}" in said
    assert "verification cases are computed right" in remarks


def test_what_the_cases_need_may_be_lacking_itself(inside: Inside, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setitem(sys.modules, "calc.verification", None)
    honest = metadata.version

    def version(name: str) -> str:
        if name == "scipy":
            raise metadata.PackageNotFoundError(name)
        return honest(name)

    monkeypatch.setattr(readiness.metadata, "version", version)
    status, said, _ = inside("ready")
    assert status == 5
    assert "they cannot run without" in said
    assert said.rstrip().endswith("-m pip install 'scipy>=1.13'")
