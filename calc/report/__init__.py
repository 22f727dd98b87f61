"""The report: what a package says, and in what order; no markup.

A report takes the account of a project and gives a `Document`: sections of blocks, whose every number is a ledger
id with a format. Addresses (section.line) are given here, citations resolved from the ledger's own inputs, so that
"from" and "into" cannot disagree with what ran. Publishing turns a document into files; studies and templates can
add sections without touching numbers. Knows the account and units; knows neither HTML nor drawing.
"""
