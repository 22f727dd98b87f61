"""The sections of a package, each a file that composes one; ``SECTIONS`` is their order.

A new section is a file here, its place in the tuple, and its test.
"""

from calc.report.sections.assumptions import compose_assumptions
from calc.report.sections.basis import compose_basis
from calc.report.sections.cases import compose_cases
from calc.report.sections.cautions import compose_cautions
from calc.report.sections.contents import compose_contents
from calc.report.sections.decision import compose_decision
from calc.report.sections.inputs import compose_inputs
from calc.report.sections.judgement import compose_judgement
from calc.report.sections.listing import compose_index, compose_listing
from calc.report.sections.method import compose_method
from calc.report.sections.references import compose_references
from calc.report.sections.software import compose_record, compose_software

SECTIONS = (
    compose_decision,
    compose_contents,
    compose_basis,
    compose_inputs,
    compose_assumptions,
    compose_method,
    compose_cases,
    compose_judgement,
    compose_cautions,
    compose_references,
    compose_software,
    compose_record,
    compose_listing,
    compose_index,
)

__all__ = ["SECTIONS"]
