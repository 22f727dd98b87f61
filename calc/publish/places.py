"""Where the templates and the fonts of this installation stand."""

from __future__ import annotations

from pathlib import Path

from calc.problems import StorageError

_HERE = Path(__file__).resolve().parent
_REPOSITORY = _HERE.parents[1]


def templates() -> Path:
    """Return the folder of templates: the wheel's own, or the repository's in an editable install.

    Raises
    ------
    StorageError
        When neither is there.
    """
    for folder in (_HERE / "templates", _REPOSITORY / "templates"):
        if folder.is_dir():
            return folder
    raise StorageError("the templates are missing from this installation; install headtrace again")


def fonts() -> Path:
    """Return the folder of fonts, cut when the package was built or installed.

    Raises
    ------
    StorageError
        When it is not there: the package is used without having been installed.
    """
    folder = _HERE / "fonts"
    if not (folder / "cut.sha256").is_file():
        raise StorageError("the fonts are missing from this installation; install headtrace again")
    return folder
