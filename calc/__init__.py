"""Headtrace: from a folder of YAML inputs to a hydraulic calculation that a checker can retrace.

The stages run in one direction, and each sub-package is one of them or a tool that several share;
`calc.pipeline` is the whole sentence as a function. Each sub-package's docstring is its design note.
"""

__version__ = "0.1.0"
