"""How an editor reads a YAML file: by the core schema of YAML 1.2.2, section 10.3."""

# ruff: noqa: ANN401 - what stands in a file is of any type
from __future__ import annotations

import re
from typing import Any

import yaml


class CoreLoader(yaml.SafeLoader):
    """Knows no dates, no sexagesimals, and only the flags, numbers and nulls of the core schema."""

    def construct_mapping(self, node: yaml.MappingNode, deep: bool = False) -> dict[Any, Any]:  # noqa: ARG002, FBT001, FBT002
        """Return a mapping whose keys are texts, as in JSON."""
        return {key.value: self.construct_object(value, deep=True) for key, value in node.value}


CoreLoader.yaml_implicit_resolvers = {}
for tag, first, pattern in (
    ("null", ["~", "n", "N", ""], r"^(?:~|null|Null|NULL|)$"),
    ("bool", list("tTfF"), r"^(?:true|True|TRUE|false|False|FALSE)$"),
    ("int", list("-+0123456789"), r"^(?:[-+]?[0-9]+|0o[0-7]+|0x[0-9a-fA-F]+)$"),
    (
        "float",
        list("-+.0123456789"),
        r"^(?:[-+]?(?:\.[0-9]+|[0-9]+(?:\.[0-9]*)?)(?:[eE][-+]?[0-9]+)?|[-+]?\.(?:inf|Inf|INF)|\.(?:nan|NaN|NAN))$",
    ),
):
    CoreLoader.add_implicit_resolver(f"tag:yaml.org,2002:{tag}", re.compile(pattern), first)


def _whole(loader: CoreLoader, node: yaml.ScalarNode) -> int:
    text = loader.construct_scalar(node)
    return int(text, 0) if text[:2] in {"0o", "0x"} else int(text)


def _decimal(loader: CoreLoader, node: yaml.ScalarNode) -> float:
    return float(loader.construct_scalar(node).replace(".inf", "inf").replace(".nan", "nan"))


CoreLoader.add_constructor("tag:yaml.org,2002:int", _whole)
CoreLoader.add_constructor("tag:yaml.org,2002:float", _decimal)


def read(text: str) -> Any:
    """Return what a file holds."""
    return yaml.load(text, CoreLoader)  # noqa: S506 - a safe loader with fewer tags
