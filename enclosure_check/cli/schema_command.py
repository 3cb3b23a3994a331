"""The command ``schema``: JSON Schemas for editors and other programs."""

import argparse
from typing import Any

from enclosure_check.cli.codes import ExitCode
from enclosure_check.cli.output import print_result

_EXAMPLES = """\
examples:
  enclosure-check schema document > enclosure.schema.json
  enclosure-check schema report > report.schema.json"""


def add(commands: Any) -> None:
    """Add the command's parser."""
    schema = commands.add_parser(
        "schema",
        help="print a JSON Schema",
        description="Prints the JSON Schema (draft 2020-12) of the document, for editors, of\n"
        "the JSON report of one document, or of a run over several.",
        epilog=_EXAMPLES,
    )
    schema.set_defaults(run=run)
    schema.add_argument("of", choices=("document", "report", "run"), help="which one")


def run(arguments: argparse.Namespace) -> ExitCode:
    """Print a schema."""
    print_result(schema_text(arguments.of))
    return ExitCode.PASS


def schema_text(of: str) -> str:
    """Give a schema as text."""
    import json

    from enclosure_check.report.schema import document_schema, report_schema, run_schema

    if of == "report":
        schema = report_schema()
    elif of == "run":
        schema = run_schema()
    else:
        from enclosure_check.description.document import Document

        schema = document_schema(Document.model_json_schema())
    return json.dumps(schema, indent=2) + "\n"
