"""Cut the package's typefaces when a wheel or an editable install is built.

The faces are static cuts of two variable fonts (SIL Open Font License 1.1) that arrive as build
requirements. Static, because a variable face is embedded in a PDF once per size and weight used; renamed,
because the licence reserves the name of the originals; cut here, so that the repository carries no fonts and
the wheel needs none from the machine. The same recipe gives the same bytes on every build: nothing of the
clock enters (the dates in the files stay those of the originals), and the tools are pinned in pyproject.toml.
"""

from __future__ import annotations

import hashlib
import logging
from functools import cache
from importlib.metadata import version
from importlib.resources import files
from io import BytesIO
from pathlib import Path
from typing import Any, NamedTuple

from fontTools.subset import Options, Subsetter
from fontTools.ttLib import TTFont
from fontTools.varLib.instancer import instantiateVariableFont
from hatchling.builders.hooks.plugin.interface import BuildHookInterface

FOLDER = "calc/publish/fonts"
PROJECTS, INPUTS = "calc/data/projects", (".yaml", ".csv")
"""Where a wheel carries the demonstration projects, and which of their files."""
RECORD = "cut.sha256"
"""Digest of the recipe on the first line, then one line a file in the form that ``sha256sum -c`` reads."""

SERIF = ("fontpkg_source_serif_4", "SourceSerif4[opsz,wght].ttf")
SERIF_ITALIC = ("fontpkg_source_serif_4", "SourceSerif4-Italic[opsz,wght].ttf")
MONO = ("fontpkg_source_code_pro", "SourceCodePro[wght].ttf")
LICENCES = {"OFL-serif.txt": "fontpkg_source_serif_4", "OFL-mono.txt": "fontpkg_source_code_pro"}


class Cut(NamedTuple):
    """One static face: its new name, where it comes from, and the place on the axes."""

    family: str
    style: str
    origin: tuple[str, str]
    axes: dict[str, float]

    @property
    def file(self) -> str:
        """Return the file name, such as ``LedgerText-Regular.ttf``."""
        return f"{self.family.replace(' ', '')}-{self.style}.ttf"


CUTS = (
    Cut("Ledger Text", "Regular", SERIF, {"opsz": 10, "wght": 400}),
    Cut("Ledger Text", "Italic", SERIF_ITALIC, {"opsz": 10, "wght": 400}),
    Cut("Ledger Text", "SemiBold", SERIF, {"opsz": 10, "wght": 620}),
    Cut("Ledger Text", "SemiBoldItalic", SERIF_ITALIC, {"opsz": 10, "wght": 620}),
    Cut("Ledger Small", "Regular", SERIF, {"opsz": 8, "wght": 480}),
    Cut("Ledger Small", "Italic", SERIF_ITALIC, {"opsz": 8, "wght": 470}),
    Cut("Ledger Small", "SemiBold", SERIF, {"opsz": 8, "wght": 620}),
    Cut("Ledger Display", "Regular", SERIF, {"opsz": 32, "wght": 380}),
    Cut("Ledger Mono", "Regular", MONO, {"wght": 400}),
)

BLOCKS = (
    (0x0020, 0x017F),  # Latin
    (0x0370, 0x03FF),  # Greek
    (0x2000, 0x209F),  # punctuation, superscripts, subscripts
    (0x2190, 0x22FF),  # arrows, mathematics
)
FEATURES = (
    *("ccmp", "locl", "kern", "mark", "mkmk", "liga", "calt"),  # correct setting of any text
    *("lnum", "tnum", "pnum", "zero", "sups", "subs", "ordn", "frac", "numr", "dnom"),  # figures
    *("smcp", "c2sc", "case"),  # small capitals and marks beside capitals
)
SINGLE = (0x1E9E, 0x2113, 0x2116, 0x25A0, 0x25A1, 0x25B2, 0x25BC, 0x25CB, 0x25CF, 0x2610, 0x2611, 0x2713)


def digest(path: Path) -> str:
    """Return the SHA-256 of a file."""
    return hashlib.sha256(path.read_bytes()).hexdigest()


def recipe() -> str:
    """Return the digest of all that decides the bytes: this file, the tool's version, the originals."""
    whole = hashlib.sha256(Path(__file__).read_bytes())
    whole.update(version("fonttools").encode())
    for package, name in (SERIF, SERIF_ITALIC, MONO):
        whole.update((files(package) / "files" / name).read_bytes())
    return whole.hexdigest()


def rename(font: TTFont, cut: Cut) -> None:
    """Give the cut its own names, as the licence asks, and drop those of the axes."""
    plain = cut.style in {"Regular", "Italic"}
    names = font["name"]
    postscript = f"{cut.family} {cut.style}".replace(" ", "-")
    said = {
        1: cut.family if plain else f"{cut.family} {cut.style}",
        2: "Italic" if "Italic" in cut.style else "Regular",
        3: f"HT;{postscript}",
        4: f"{cut.family} {cut.style}",
        6: postscript,
        16: cut.family,
        17: cut.style,
    }
    for entry in list(names.names):
        if entry.nameID in {21, 22, 25} or entry.nameID > 255:  # noqa: PLR2004 - names above 255 are the axes'
            names.removeNames(nameID=entry.nameID)
    names.names = [entry for entry in names.names if entry.platformID == 3]  # noqa: PLR2004 - one platform
    for number, text in said.items():
        names.setName(text, number, 3, 1, 0x409)
    font["OS/2"].usWeightClass = 600 if "SemiBold" in cut.style else 400


@cache
def subset(package: str, name: str) -> bytes:
    """Return an original, still variable, with the characters and layout rules that the package uses."""
    font = TTFont(BytesIO((files(package) / "files" / name).read_bytes()), recalcTimestamp=False)
    options = Options()
    options.layout_features = [*FEATURES]
    options.name_IDs = ["*"]
    options.notdef_outline = True
    options.glyph_names = False
    options.hinting = False
    subsetter = Subsetter(options)
    subsetter.populate(unicodes=[*SINGLE, *(code for low, high in BLOCKS for code in range(low, high + 1))])
    subsetter.subset(font)
    written = BytesIO()
    font.save(written)
    return written.getvalue()


def make(cut: Cut) -> bytes:
    """Return the bytes of one face."""
    original = TTFont(BytesIO(subset(*cut.origin)), recalcTimestamp=False)
    font = instantiateVariableFont(original, cut.axes, inplace=True)
    rename(font, cut)
    for table in ("STAT", "DSIG"):  # what they state is of the original, no longer of the cut
        if table in font:
            del font[table]
    written = BytesIO()
    font.save(written)
    return written.getvalue()


def current(folder: Path) -> bool:
    """Tell whether the folder holds every file of this recipe, unaltered."""
    try:
        first, *lines = (folder / RECORD).read_text(encoding="utf-8").splitlines()
        found = dict(line.split("  ")[::-1] for line in lines)
        return (
            first == f"# {recipe()}"
            and found.keys() == {cut.file for cut in CUTS} | LICENCES.keys()
            and all(digest(folder / name) == expected for name, expected in found.items())
        )
    except (OSError, ValueError):
        return False


def cut_all(folder: Path) -> bool:
    """Cut every face into the folder unless it is current; tell whether anything was cut."""
    if current(folder):
        return False
    logging.getLogger("fontTools").setLevel(logging.ERROR)
    folder.mkdir(parents=True, exist_ok=True)
    made = {cut.file: make(cut) for cut in CUTS}
    made |= {name: (files(package) / "LICENSE").read_bytes() for name, package in LICENCES.items()}
    for stale in folder.iterdir():
        stale.unlink()
    for name, content in made.items():
        (folder / name).write_bytes(content)
    lines = [f"{hashlib.sha256(content).hexdigest()}  {name}\n" for name, content in sorted(made.items())]
    (folder / RECORD).write_text(f"# {recipe()}\n{''.join(lines)}", encoding="utf-8")
    return True


class Cutting(BuildHookInterface[Any]):
    """The build's hook: fonts into ``calc/publish/fonts``; templates and projects into the wheel."""

    PLUGIN_NAME = "custom"

    def initialize(self, version: str, build_data: dict[str, Any]) -> None:
        """Cut the faces; in a wheel that carries its files, bring the templates along."""
        if self.target_name != "wheel":
            return
        cut_all(Path(self.root) / FOLDER)
        if version != "editable":  # an editable install reads the repository's own templates and projects
            brought: dict[str, str] = build_data["force_include"]
            brought[str(Path(self.root) / "templates")] = "calc/publish/templates"
            for file in sorted(Path(self.root).glob("projects/*/*")):
                if file.suffix in INPUTS:
                    brought[str(file)] = f"{PROJECTS}/{file.parent.name}/{file.name}"
