"""Works of which nothing is to be remarked, and ways to spoil them."""

from __future__ import annotations

from pathlib import Path

from accounts import accounted

from calc.account import Account, Finding

SOUND = """\
fluid: {temperature: {value: 12 degC, source: S1}}
site: {gravity: {value: 9.81 m/s², source: S1}}
friction: colebrook-white
reservoirs:
  mere:
    level: {value: 40 m, source: S1}
    low: {value: 38 m, source: S1}
    high: {value: 41 m, source: S1}
  tarn:
    level: {value: 30 m, source: S1}
junctions:
  cross:
    elevation: {value: 10 m, source: S1}
    withdrawal: {value: 5 L/s, source: S1}
pipes:
  upper:
    from: mere
    to: cross
    length: {value: 400 m, source: S1}
    bore: {value: 204.6 mm, source: S1}
    roughness: {value: 0.1 mm, source: S1, range: [0.05 mm, 0.3 mm]}
    ends: {from: square}
    fittings: [{kind: bend-90}]
  lower:
    from: cross
    to: tarn
    length: {value: 650 m, source: S1}
    bore: {value: 252.8 mm, source: S1}
    roughness: {value: 0.1 mm, source: S1}
    ends: {to: square}
    fittings: [{kind: bend-45}]
"""
PROJECT = "references: {S1: {title: Survey}}\n"


def spoiled(*changes: tuple[str, str], added: str = "") -> str:
    """Return the sound works with texts replaced where they first stand, and lines added at the end."""
    text = SOUND
    for old, new in changes:
        assert old in text, old
        text = text.replace(old, new, 1)
    return text + added


def account_of(folder: Path, text: str, project: str = PROJECT) -> Account:
    """Return the account of works written into a folder."""
    return accounted(folder, text, project=project)


def findings(folder: Path, text: str, project: str = PROJECT) -> tuple[Finding, ...]:
    """Return what is remarked on works written into a folder."""
    return account_of(folder, text, project).findings
