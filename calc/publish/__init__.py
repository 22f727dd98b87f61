"""Publishing: a document becomes files, and every number printed is proved against the ledger.

For
    turning a `calc.report.document.Document` into the package: the PDF for the record, one self-contained page on which
    a click on a number walks its derivation, results and ledger as data, the inputs as read, and a manifest.
Takes
    the document, the ledger, the input files' bytes and the results as data.
Gives
    bytes by name (`calc.publish.package.publish`), written whole or not at all (`calc.publish.package.write_package`).
Must not know
    how a number came about, nor in what order things are said. It formats nothing: a number's text comes with it.
Why this way
    One template set serves paper and screen. Templates cannot print a bare number nor a digit that is not marked as
    what it is, and `calc.publish.seal` reads the finished page again and formats each ledger value anew. Only here are
    jinja2, weasyprint, matplotlib and pikepdf known, and they are imported late so that the command starts fast.
"""
