"""Texts of small projects."""

from __future__ import annotations

from pathlib import Path

SMALLEST = """\
reservoirs:
  upper: {level: 214.60 m}
  lower: {level: 183.00 m}
pipes:
  main: {from: upper, to: lower, length: 1850 m, bore: 384.4 mm, roughness: 0.15 mm}
"""
JOINED = """\
reservoirs:
  upper: {level: 214.60 m}
  lower: {level: 183.00 m}
junctions:
  cross: {elevation: 171.0 m, withdrawal: 12 L/s}
pipes:
  upper-main: {from: upper, to: cross, length: 1850 m, bore: 384.4 mm, roughness: 0.15 mm}
  lower-main: {from: cross, to: lower, length: 950 m, bore: 333.2 mm, roughness: 0.15 mm}
"""
UNFED = JOINED + "cases:\n  closed: {with: {'pipes.*.open': false}}\n"
"""A case in which no open path joins the junction to a reservoir."""

EXACT = """\
friction: fixed
site: {gravity: 9.80665 m/s²}
reservoirs:
  high: {level: 110.00 m}
  low: {level: 100.00 m}
pipes:
  link: {from: low, to: high, length: 1000 m, bore: 300 mm, friction_factor: 0.02}
"""
"""One pipe with a fixed Darcy f and no other loss: its flow has a closed form."""


def samples_and_projects() -> list[Path]:
    """Return the YAML files of every sample, demonstration project and verification case."""
    root = Path(__file__).resolve().parents[2]
    return sorted([*root.glob("calc/data/*/*/*.yaml"), *root.glob("projects/*/*.yaml")])
