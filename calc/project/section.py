"""Sections of a project that layers above declare and pass down."""

from __future__ import annotations

from dataclasses import dataclass

from calc.components import Field


@dataclass(frozen=True, slots=True)
class Later:
    """A word of the contract that this version does not know yet.

    Attributes
    ----------
    field : str
        The field.
    word : str
        The word that may stand there one day; empty when the field itself is meant.
    hint : str
        What to do instead.
    """

    field: str
    word: str
    hint: str


@dataclass(frozen=True, slots=True)
class SectionSchema:
    """A top-level key and what may stand under it.

    Attributes
    ----------
    name : str
        The key, such as ``solver``.
    words : str
        What it is for.
    fields : tuple of Field
        Of forms `Quantity`, `Count`, `Word`, `Text` and `Flag`.
    by_node : tuple of Field
        Fields that are a mapping from node ids to a `Quantity`: ``start: {marl-cross: 190 m}``. They become
        ``parts``, one record per node with the value under ``value``.
    later : tuple of Later
        What is refused as not part of this version.
    """

    name: str
    fields: tuple[Field, ...]
    by_node: tuple[Field, ...] = ()
    later: tuple[Later, ...] = ()
    words: str = ""
