"""Reading what holds for the whole works: the liquid, the site, the default law and the constants."""

from __future__ import annotations

from collections.abc import Collection, Mapping

from calc.components import Field, Quantity, Record, Schema, Stated, Text
from calc.components.pipe import LAW_CONSTANTS, LAW_INPUT
from calc.kinds import (
    ACCELERATION,
    DENSITY,
    DYNAMIC_VISCOSITY,
    ELEVATION,
    KINEMATIC_VISCOSITY,
    NUMBER,
    PRESSURE,
    TEMPERATURE,
)
from calc.marks import Mark
from calc.physics.friction import LAW_NAMES
from calc.project import shipped
from calc.project.notes import empty
from calc.project.reader import Reader
from calc.project.records import read_fields
from calc.project.wording import quoted
from calc.yamlfile import Entry, Node, Scalar
from calc.yamlfile import Mapping as MappingNode

VISCOSITIES = (Quantity(KINEMATIC_VISCOSITY, above=0.0), Quantity(DYNAMIC_VISCOSITY, above=0.0))
"""The forms in which a viscosity may be given."""

PROPERTIES = ("density", "viscosity", "vapour_pressure")

FLUID = Schema(
    "fluid",
    "fluid",
    (
        Field("kind", Text(), words="liquid"),
        Field(
            "temperature",
            Quantity(TEMPERATURE, at_least=273.16, at_most=373.15),
            words="temperature of water",
        ),
        Field("density", Quantity(DENSITY, at_least=100.0, at_most=20_000.0), words="density"),
        Field("viscosity", VISCOSITIES[0], words="viscosity, kinematic or dynamic"),
        Field(
            "vapour_pressure",
            Quantity(PRESSURE, at_least=0.0, at_most=1e6),
            words="vapour pressure, absolute",
        ),
    ),
    excludes=tuple(("temperature", name) for name in PROPERTIES),
)
SITE = Schema(
    "site",
    "site",
    (
        Field("altitude", Quantity(ELEVATION, at_least=-430.0, at_most=9000.0), words="altitude above sea level"),
        Field("gravity", Quantity(ACCELERATION, at_least=9.7, at_most=10.0), words="gravity"),
    ),
)
TRANSITION = Schema(
    "transition",
    "transition",
    (
        Field("laminar_below", Quantity(NUMBER, at_least=100.0, at_most=1e5), words="end of laminar flow, Re"),
        Field(
            "turbulent_above",
            Quantity(NUMBER, at_least=100.0, at_most=1e5),
            words="begin of turbulent flow, Re",
        ),
    ),
)

HAZEN_WILLIAMS = Schema(
    "hazen_williams",
    "Hazen–Williams",
    (
        Field("coefficient", Quantity(NUMBER, at_least=8.0, at_most=13.0), words="k of h = k L Q^a / (C^a D^b) in SI"),
        Field("flow_exponent", Quantity(NUMBER, at_least=1.5, at_most=2.0), words="a, exponent of flow"),
        Field("bore_exponent", Quantity(NUMBER, at_least=4.0, at_most=6.0), words="b, exponent of bore"),
    ),
)
MANNING = Schema(
    "manning",
    "Manning",
    (
        Field("coefficient", Quantity(NUMBER, at_least=8.0, at_most=13.0), words="k of h = k n² L Q² / D^b in SI"),
        Field("bore_exponent", Quantity(NUMBER, at_least=4.0, at_most=6.0), words="b, exponent of bore"),
    ),
)
CONSTANTS: dict[str, Schema] = {schema.group: schema for schema in (TRANSITION, HAZEN_WILLIAMS, MANNING)}
"""What stands under ``constants``. The bounds of a coefficient leave out the forms of its law in other units."""


def read_friction(reader: Reader, entry: Entry | None) -> Stated | None:
    """Return the default law; None when it could not be read."""
    if entry is None:
        return _default(reader, "friction")
    return reader.word(entry.value, "friction", LAW_NAMES, "unknown-law", "friction law")


def read_site(reader: Reader, entry: Entry | None) -> Record:
    """Return altitude and gravity."""
    return _read(reader, SITE, entry, "site")


def read_constants(reader: Reader, entry: Entry | None) -> dict[str, Record]:
    """Return the constants of the laws by group, defaults filled in."""
    standing: dict[str, Entry] = {}
    constants = reader.mapping(entry.value, "constants", "a mapping") if entry else None
    for one in constants.entries if constants else ():
        if one.key.text in CONSTANTS:
            standing[one.key.text] = one
        else:
            reader.unknown(one.key, f"constants.{one.key.text}", tuple(CONSTANTS))
    found = {name: _read(reader, schema, standing.get(name), f"constants.{name}") for name, schema in CONSTANTS.items()}
    transition = found[TRANSITION.group].stated
    check_transition(reader, transition.get("laminar_below"), transition.get("turbulent_above"))
    return found


def in_force(
    reader: Reader, constants: Mapping[str, Record], laws: Collection[str], changed: Collection[str]
) -> dict[str, Record]:
    """Return the constants without those that nobody states and no pipe needs; their defaults are not in use.

    Parameters
    ----------
    reader : Reader
        Holds the defaults in use.
    constants : mapping of str to Record
        From `read_constants`.
    laws : collection of str
        Friction laws that pipes follow in some case.
    changed : collection of str
        Groups of constants that cases change.
    """
    idle = {group for law, group in LAW_CONSTANTS.items() if law not in laws and group not in changed}
    if TRANSITION.group not in changed and not any(LAW_INPUT.get(law) in ("roughness", None) for law in laws):
        idle.add(TRANSITION.group)  # the other laws hold at every Reynolds number
    idle = {group for group in idle if all(stated.shipped for stated in constants[group].stated.values())}
    for group in idle:
        for name in constants[group].stated:
            reader.defaults.pop(f"constants.{group}.{name}", None)
    return {group: record for group, record in constants.items() if group not in idle}


def check_transition(reader: Reader, low: Stated | None, high: Stated | None) -> None:
    """Note limits of the transition that stand the wrong way round."""
    if low and high and low.si >= high.si:
        found = f"{quoted(low.written)} is not below 'turbulent_above', {quoted(high.written)}"
        at = high if low.shipped else low
        reader.note(at.mark, "wrong-order", "constants.transition", found, "laminar_below < turbulent_above")


def read_fluid(reader: Reader, entry: Entry | None) -> Record:
    """Return the liquid: water at a temperature, or any liquid by its density and viscosity."""
    node = reader.mapping(entry.value, "fluid", "a mapping: {kind: water, temperature: 10 degC}") if entry else None
    mark = entry.key.mark if entry else _nowhere("fluid.temperature")
    if node is None:
        defaults = {name: _default(reader, f"fluid.{name}") for name in ("kind", "temperature")}
        return Record("", mark, defaults)
    stated, parts = read_fields(reader, FLUID, node, "fluid", mark, extra=("viscosity",))
    present = node.keys()
    if "viscosity" in parts:
        _read_viscosity(reader, parts["viscosity"][1], stated)
    if "kind" not in present:
        stated["kind"] = _default(reader, "fluid.kind")
    if "temperature" in present and any(name in present for name in PROPERTIES):
        return Record("", mark, stated)  # told already: one of the two
    if any(name in present for name in PROPERTIES):
        for name in ("density", "viscosity"):
            if name not in present:
                found = f"'{name}' is missing"
                expected = "'density' and 'viscosity' together, or water at a temperature"
                reader.note(mark, "missing-key", f"fluid.{name}", found, expected)
    elif "kind" in stated and stated["kind"].text != "water":
        kind = stated["kind"]
        hint = "state 'density' and 'viscosity' of another liquid"
        reader.note(kind.mark, "unknown-kind", "fluid.kind", f"unknown fluid {quoted(kind.text)}", "'water'", hint)
    elif "temperature" not in present:
        stated["temperature"] = _default(reader, "fluid.temperature")
    return Record("", mark, stated)


def _read_viscosity(reader: Reader, node: Node, stated: dict[str, Stated]) -> None:
    """Read a viscosity of either kind, and say which it is."""
    kinds: list[str] = []

    def read(scalar: Scalar, path: str) -> Stated | None:
        got = reader.quantity(scalar, path, VISCOSITIES)
        if got is None:
            return None
        kinds.append(got[1].kind.name)
        return got[0]

    path = "fluid.viscosity"
    one = read(node, path) if isinstance(node, Scalar) else reader.supported(node, path, read)
    if one is not None:
        stated["viscosity"] = one
        stated["viscosity_kind"] = Stated(kinds[0], one.written, one.mark)


def _read(reader: Reader, schema: Schema, entry: Entry | None, path: str) -> Record:
    """Read a record whose every field has a default."""
    node = reader.mapping(entry.value, path, "a mapping") if entry and not empty(entry.value) else None
    first = f"{path}.{schema.fields[0].name}"
    mark = entry.key.mark if entry else _nowhere(first)
    node = node or MappingNode((), mark)
    stated, _ = read_fields(reader, schema, node, path, mark)
    for field in schema.fields:
        if node.get(field.name) is None:
            stated[field.name] = _default(reader, f"{path}.{field.name}")
    return Record(path.rpartition(".")[2] if "." in path else "", mark, stated)


def _default(reader: Reader, path: str) -> Stated:
    """Return a default and remember that it is in use."""
    reader.defaults[path] = shipped.defaults()[path]
    return reader.defaults[path]


def _nowhere(path: str) -> Mark:
    """Return the mark of a record that no file holds: that of its first default."""
    return shipped.defaults()[path].mark
