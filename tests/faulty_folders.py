"""Faulty project folders: what stands in ``tests/faulty``, each written out as a folder of its own.

A file there is a theme; each of its cases is one fault in a sound folder::

    bore-without-a-unit:
      code: bare-number
      change:
        "bore: 384.4 mm": "bore: «384.4»"     # where the text first stands
      says: "pipes.upper-main.bore: '384.4' has no unit; expected a bore, such as '384.4 mm'"
      schema: true

``«`` and ``»`` enclose what the problem is to underline, and are not written. Further: ``base``, the sound folder
that is changed (``sound`` if not said, ``none`` for an empty one); ``after``, lines put behind the line that
holds a text; ``without``, lines left out; ``add``, lines at the end of ``network.yaml``; ``files``, whole files;
``fill``, a sign and the text that stands for it, so many times over; ``encoding`` of the file at fault; ``links``
and ``folders`` made in the folder; ``place``, where no text can be underlined; ``asked``, the file called instead
of the folder; ``hint``, the way out that is told.
``says`` is the beginning of what is said behind the place. ``schema`` tells whether a schema of one file could
refuse it too.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import yaml

HERE = Path(__file__).parent / "faulty"
SOUND_FOLDERS = ("sound", "sound-table")


@dataclass(frozen=True)
class FaultyFolder:
    """A folder with one fault.

    Attributes
    ----------
    name, theme : str
        Its key, and the file in which it stands.
    code, says, hint : str
        The problem: its code, the beginning of its sentence, and its way out or an empty string.
    schema : bool
        Whether a schema of one file could refuse it.
    place : str
        ``file:line:column``, or empty for a problem of the folder itself.
    length : int
        Characters underlined; 0 where none can be.
    files : mapping of str to bytes
        What is written, by name.
    links, folders
        Symbolic links by name, and folders, to be made.
    asked : str
        The file in the folder that the call names instead, or empty.
    """

    name: str
    theme: str
    code: str
    says: str
    hint: str
    schema: bool
    place: str
    length: int
    files: dict[str, bytes]
    links: dict[str, str] = field(default_factory=dict)
    folders: tuple[str, ...] = ()
    asked: str = ""

    def write(self, folder: Path) -> Path:
        """Write it into a folder, made unless there is nothing to write; return what the call is to name."""
        if self.files or self.links or self.folders:
            folder.mkdir(parents=True)
        for name, content in self.files.items():
            (folder / name).write_bytes(content)
        for name, target in self.links.items():
            (folder / name).symlink_to(target)
        for name in self.folders:
            (folder / name).mkdir()
        return folder / self.asked


def faulty_folders() -> tuple[FaultyFolder, ...]:
    """Return every faulty folder, theme by theme."""
    themes = sorted(HERE.glob("*.yaml"))
    return tuple(_read(name, theme.stem, case) for theme in themes for name, case in _cases(theme).items())


def sound_folder(name: str) -> dict[str, str]:
    """Return the files of a sound folder, ``network.yaml`` first."""
    if name == "none":
        return {}
    files = sorted((HERE / name).iterdir(), key=lambda file: file.suffix != ".yaml")
    return {file.name: file.read_text("utf-8") for file in files}


def _cases(theme: Path) -> dict[str, dict[str, Any]]:
    cases: dict[str, dict[str, Any]] = yaml.safe_load(theme.read_text("utf-8"))
    return cases


def _read(name: str, theme: str, case: dict[str, Any]) -> FaultyFolder:
    texts = sound_folder(case.pop("base", "sound"))
    for old, new in case.pop("change", {}).items():
        _replace(texts, old, new, 0)
    for line, new in case.pop("after", {}).items():
        _replace(texts, f"{line}\n", f"{line}\n{new}\n", 0)
    for line in case.pop("without", ()):
        _replace(texts, f"{line}\n", "", 1)
    if "add" in case:
        texts["network.yaml"] += case.pop("add")
    texts |= case.pop("files", {})
    for sign, (text, times) in case.pop("fill", {}).items():
        texts = {one: content.replace(sign, text * times) for one, content in texts.items()}
    files, place, length = _unmarked(texts, case.pop("place", ""))
    encoding = case.pop("encoding", "utf-8")
    at_fault = place.partition(":")[0]
    return FaultyFolder(
        name,
        theme,
        place=place,
        length=length,
        files={one: content.encode(encoding if one == at_fault else "utf-8") for one, content in files.items()},
        hint=case.pop("hint", ""),
        folders=tuple(case.pop("folders", ())),
        **case,
    )


def _replace(texts: dict[str, str], old: str, new: str, indented: int) -> None:
    """Replace a text where it first stands, with the blanks before it where it is a whole line."""
    name = next(name for name, text in texts.items() if old in text)
    start = texts[name].index(old)
    begin = texts[name].rindex("\n", 0, start) + 1 if indented else start
    texts[name] = texts[name][:begin] + new + texts[name][start + len(old) :]


def _unmarked(texts: dict[str, str], place: str) -> tuple[dict[str, str], str, int]:
    """Return the texts without their marks, and the place and length of what these enclose."""
    length = 0
    for name, text in texts.items():
        if "«" in text:
            before, _, rest = text.partition("«")
            inside = rest.partition("»")[0]
            column = len(before) - (before.rfind("\n") + 1) + 1
            place, length = f"{name}:{before.count(chr(10)) + 1}:{column}", len(inside)
    return {name: text.replace("«", "").replace("»", "") for name, text in texts.items()}, place, length
