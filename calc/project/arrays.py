"""A case as arrays: base values once, then the lines of the case, row by row at numpy's speed."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace
from functools import cached_property
from weakref import WeakKeyDictionary

import numpy as np
import numpy.typing as npt

from calc.components import Network, Record
from calc.components.fitting import FormTerms, coefficients, computed_kind
from calc.components.pipe import LAW_INPUT, EmpiricalConstants, FittingTerms, PipeTerms
from calc.equation import ARRAYS, Labels, Value, value_of
from calc.physics.coefficient import KINDS
from calc.physics.friction import LAW_NAMES
from calc.project.cases import follows_friction, lines_in
from calc.project.model import Line, Project
from calc.project.shipped import defaults

Array = npt.NDArray[np.float64]
Rows = npt.NDArray[np.int64]

_CODES = {name: code for code, name in enumerate(LAW_NAMES)}


@dataclass(frozen=True)
class _Fittings:
    """Ends and fittings of all pipes in their order; ``own_bore`` is NaN where the pipe's bore serves."""

    rows: tuple[str, ...]
    pipe: Rows
    count: Array
    forward: Array
    reverse: Array
    own_bore: Array
    computed: Rows
    form: FormTerms[Value]

    def terms(self, bore: Array) -> FittingTerms[Array]:
        """Return the inputs of the chain where the pipes have these bores."""
        own = np.where(np.isnan(self.own_bore), bore[self.pipe], self.own_bore)
        forward, reverse = self.forward.copy(), self.reverse.copy()
        at = self.computed
        if len(at):
            form: FormTerms[Value] = replace(self.form, bore=own[at])
            got = coefficients(ARRAYS, form)
            found, back, smaller = (value_of(one) for one in (got.forward, got.reverse, got.smaller_bore))
            forward[at], reverse[at] = found, np.where(np.isnan(back), found, back)
            own[at] = np.where(np.isnan(smaller), own[at], smaller)
        return FittingTerms(
            rows=self.rows,
            pipe=self.pipe.copy(),
            count=self.count.copy(),
            coefficient_forward=forward,
            coefficient_reverse=reverse,
            bore=own,
        )


class _Inputs:
    """The inputs as they stand, column by column; kept as long as the project is."""

    def __init__(self, project: Project) -> None:
        self.groups = {
            name: dict(project.group(name))
            for name in ("reservoirs", "junctions", "pipes", "fluid", "site", "constants", "friction")
        }
        self.index = {name: {row: at for at, row in enumerate(group)} for name, group in self.groups.items()}
        self.nodes = dict(project.nodes)
        self.friction = project.friction
        self.follows = np.array([follows_friction(project, one) for one in project.pipes.values()], dtype=bool)
        self.columns: dict[tuple[str, str], Array] = {}

    def column(self, group: str, field: str) -> Array:
        """Return a column; NaN where a record does not state the field."""
        key = (group, field)
        if key not in self.columns:
            self.columns[key] = _numbers(self.groups[group].values(), field)
        return self.columns[key]

    @cached_property
    def law(self) -> Rows:
        """The friction law of each pipe; −1 where it could not be read."""
        pipes = self.groups["pipes"].values()
        return np.array([_CODES.get(pipe.text("law"), -1) for pipe in pipes], dtype=np.int64)

    @cached_property
    def law_places(self) -> npt.NDArray[np.object_]:
        """Where the law of each pipe is stated, as ``file:line:column``; empty where it could not be read."""
        stated = (pipe.stated.get("law") for pipe in self.groups["pipes"].values())
        return np.array(["" if law is None else str(law.mark) for law in stated], dtype=object)

    @cached_property
    def ends(self) -> tuple[Rows, Rows]:
        """The nodes at ``from`` and ``to``."""
        pipes = self.groups["pipes"].values()
        start, end = ([self.nodes[pipe.text(name)] for pipe in pipes] for name in ("from", "to"))
        return np.array(start, dtype=np.int64), np.array(end, dtype=np.int64)

    @cached_property
    def fittings(self) -> _Fittings:
        """Ends and fittings: those of each pipe in the order end at ``from``, fittings, end at ``to``."""
        found: list[Record] = []
        pipe: list[int] = []
        own: list[float] = []
        for at, record in enumerate(self.groups["pipes"].values()):
            parts = in_order(record)
            found += parts
            pipe += [at] * len(parts)
            own += [np.nan if stands_on_pipe(record, part) else part.number("bore") for part in parts]
        computed = [at for at, part in enumerate(found) if computed_kind(part.stated)]
        return _Fittings(
            rows=tuple(part.id for part in found),
            pipe=np.array(pipe, dtype=np.int64),
            count=_numbers(found, "count"),
            forward=_numbers(found, "K"),
            reverse=_numbers(found, "K_reverse"),
            own_bore=np.array(own, dtype=np.float64),
            computed=np.array(computed, dtype=np.int64),
            form=_form([found[at] for at in computed]),
        )


def _form(computed: Sequence[Record]) -> FormTerms[Value]:
    return FormTerms(
        form_labels(computed),
        *(_numbers(computed, field) for field in ("bore", "onward_bore", "angle", "radius_ratio", "Kv", "Cv")),
    )


def form_labels(computed: Sequence[Record]) -> Labels:
    """Return the computed kind of each of some fittings, with the place where it is stated."""
    kinds = [computed_kind(part.stated) for part in computed]
    fields = ["kind" if kind in ("bend", "step", "taper") else kind for kind in kinds]
    places = tuple(str(part.stated[field].mark) for part, field in zip(computed, fields, strict=True))
    return Labels(KINDS, np.array([KINDS.index(kind) for kind in kinds], dtype=np.int64), places)


def _numbers(records: Iterable[Record], field: str) -> Array:
    return np.array([record.number(field) for record in records], dtype=np.float64)


def in_order(pipe: Record) -> list[Record]:
    """Return the end at ``from``, the fittings and the end at ``to`` of a pipe, in the order of the water."""
    ends = pipe.parts.get("ends", ())
    first = [end for end in ends if end.id.endswith("/from")]
    last = [end for end in ends if end.id.endswith("/to")]
    return [*first, *pipe.parts.get("fittings", ()), *last]


def stands_on_pipe(pipe: Record, part: Record) -> bool:
    """Return whether a fitting's coefficient stands on its pipe's bore, whatever a case makes of it."""
    return part.stated.get("bore") is pipe.stated.get("bore")


_KEPT: WeakKeyDictionary[Project, _Inputs] = WeakKeyDictionary()


class Effective:
    """The values of a case, after all changes in force.

    Parameters
    ----------
    project : Project
        The project.
    case : str
        Id of the case.
    """

    def __init__(self, project: Project, case: str) -> None:
        self.inputs = _KEPT.get(project) or _KEPT.setdefault(project, _Inputs(project))
        self.lines = tuple(line for _, line in lines_in(project, case))

    def rows(self, line: Line) -> Rows | slice:
        """Return where in its group a line acts."""
        index = self.inputs.index[line.group]
        if len(line.rows) == len(index):
            return slice(None)
        return np.array([index[row] for row in line.rows], dtype=np.int64)

    def numbers(self, group: str, field: str) -> Array:
        """Return a field of all rows of a group in SI, flags as 0 and 1, NaN where it is not stated."""
        found = self.inputs.column(group, field).copy()
        for line in self.lines:
            if line.group == group and line.field == field:
                at = self.rows(line)
                found[at] = line.stated.si if line.how == "with" else found[at] * line.stated.si
        return found

    def number(self, group: str, row: str, field: str) -> float:
        """Return one value in SI."""
        return float(self.numbers(group, field)[self.inputs.index[group][row]])

    def constant(self, law: str, field: str) -> Array:
        """Return a constant of a law, shape (1,); NaN where no case needs that law."""
        at = self.inputs.index["constants"].get(law)
        return np.array([np.nan]) if at is None else self.numbers("constants", field)[at : at + 1]

    def limit(self, field: str) -> Array:
        """Return a limit of the transition, shape (1,); where no law has one the default, which findings judge by."""
        if "transition" in self.inputs.index["constants"]:
            return self.constant("transition", field)
        return np.array([defaults()[f"constants.transition.{field}"].si])

    def law(self) -> Labels:
        """Return the friction law of each pipe."""
        codes, follows = self.inputs.law.copy(), self.inputs.follows.copy()
        places = self.inputs.law_places.copy()
        for line in self.lines:
            if line.group == "friction":
                codes[follows], places[follows] = _CODES[line.stated.text], str(line.stated.mark)
            elif line.group == "pipes" and line.field == "law":
                at = self.rows(line)
                codes[at], follows[at] = _CODES[line.stated.text], False
                places[at] = str(line.stated.mark)
        return Labels(LAW_NAMES, codes, tuple(places.tolist()))


def network(project: Project, case: str, viscosity: float) -> Network:
    """Return a case as arrays in SI.

    Parameters
    ----------
    project : Project
        The project.
    case : str
        Id of the case.
    viscosity : float
        Kinematic viscosity of the liquid in this case, m²/s.

    Returns
    -------
    Network
        Nodes are the reservoirs, then the junctions; all rows in the order of the files. An inflow is a
        negative withdrawal.
    """
    now = Effective(project, case)
    level = now.numbers("reservoirs", "level")
    taken = np.nan_to_num(now.numbers("junctions", "withdrawal"), nan=0.0)
    brought = np.nan_to_num(now.numbers("junctions", "inflow"), nan=0.0)
    start, end = now.inputs.ends
    return Network(
        nodes=tuple(project.nodes),
        level=np.concatenate([level, np.full(len(taken), np.nan)]),
        withdrawal=np.concatenate([np.zeros(len(level)), taken - brought]),
        start=start.copy(),
        end=end.copy(),
        open=now.numbers("pipes", "open") != 0.0,
        pipes=_pipe_terms(now, viscosity),
    )


def _pipe_terms(now: Effective, viscosity: float) -> PipeTerms[Array]:
    bore = now.numbers("pipes", "bore")
    law = now.law()
    return PipeTerms(
        rows=tuple(now.inputs.groups["pipes"]),
        length=now.numbers("pipes", "length"),
        bore=bore,
        roughness=_where_used(now, "roughness", law),
        friction_factor=_where_used(now, "friction_factor", law),
        hazen_williams_c=_where_used(now, "hazen_williams_c", law),
        manning_n=_where_used(now, "manning_n", law),
        parallel=now.numbers("pipes", "parallel"),
        law=law,
        fittings=now.inputs.fittings.terms(bore),
        viscosity=np.array([viscosity]),
        gravity=now.numbers("site", "gravity"),
        laminar_below=now.limit("laminar_below"),
        turbulent_above=now.limit("turbulent_above"),
        constants=EmpiricalConstants(
            hazen_williams_coefficient=now.constant("hazen_williams", "coefficient"),
            hazen_williams_flow_exponent=now.constant("hazen_williams", "flow_exponent"),
            hazen_williams_bore_exponent=now.constant("hazen_williams", "bore_exponent"),
            manning_coefficient=now.constant("manning", "coefficient"),
            manning_bore_exponent=now.constant("manning", "bore_exponent"),
        ),
    )


def _where_used(now: Effective, field: str, law: Labels) -> Array:
    """Return a field where the law of the pipe needs it, NaN elsewhere."""
    return np.where(needing(field, law), now.numbers("pipes", field), np.nan)


def needing(field: str, law: Labels) -> npt.NDArray[np.bool_]:
    """Return the pipes whose law needs a field."""
    return np.isin(law.codes, [code for name, code in _CODES.items() if LAW_INPUT[name] == field])
