"""The command line: `python -m pycore report JOB.json [--edition FILE] [--language de] [--text]`."""

import argparse
import io
import json
import sys
from collections.abc import Sequence
from pathlib import Path

from pycore import __version__
from pycore.api import handle
from pycore.contract import REFUSAL_FORMAT, REQUEST_FORMAT
from pycore.schema import job_schema
from pycore.words import LANGUAGES


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command. Arguments: the words after the program's name.

    Returns 0, or 2 where the job is refused (the refusal, as JSON, on standard output).
    """
    parser = argparse.ArgumentParser(prog="wedgewright", description=__doc__)
    parser.add_argument("--version", action="version", version=__version__)
    commands = parser.add_subparsers(dest="command", required=True)
    report = commands.add_parser("report", help="report on one job document")
    report.add_argument("job", type=Path, help="the job, a JSON file")
    report.add_argument("--edition", type=Path, help="an edition of the shop's own, a JSON file")
    report.add_argument("--text", action="store_true", help="print text instead of JSON")
    report.add_argument("--language", choices=LANGUAGES, help="the language of its sentences")
    commands.add_parser("schema", help="print the JSON Schema of the job document")
    chosen = parser.parse_args(arguments)
    if isinstance(sys.stdout, io.TextIOWrapper):
        sys.stdout.reconfigure(encoding="utf-8")  # the prism sign, whatever the console speaks
    if chosen.command == "schema":
        print(json.dumps(job_schema(), indent=2))
        return 0
    try:
        answer = handle(_request(chosen))
    except (OSError, UnicodeDecodeError) as error:
        parser.exit(1, f"{error}\n")
    parsed = json.loads(answer)
    refused = parsed["format"] == REFUSAL_FORMAT
    sys.stdout.write(parsed["text"] if chosen.text and not refused else answer + "\n")
    return 2 if refused else 0


def _request(chosen: argparse.Namespace) -> str:
    """Wrap the files' texts as they are: every number keeps its digits."""
    job_text = chosen.job.read_text(encoding="utf-8", errors="surrogateescape")
    if not (chosen.edition or chosen.language or chosen.text):
        return str(job_text)
    editions = [chosen.edition.read_text(encoding="utf-8")] if chosen.edition else []
    return (
        f'{{"format": "{REQUEST_FORMAT}", "do": "report", "text": {json.dumps(chosen.text)}, '
        f'"language": "{chosen.language or LANGUAGES[0]}", '
        f'"editions": [{", ".join(editions)}], "job": {job_text}}}'
    )


if __name__ == "__main__":
    sys.exit(main())
