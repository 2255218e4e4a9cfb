"""``pathcalc solve``: summary or JSON, and the reports."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import click

from pathcalc.cli.group import COMMANDS
from pathcalc.cli.inputs import PATH, Input, Inputs, gather, root_option
from pathcalc.cli.reports import PAPERS, Reports, asked_words
from pathcalc.cli.run import report_error
from pathcalc.cli.talk import Talk, json_text, loudness, write_utf8
from pathcalc.errors import Finding, NoSolutionError, UsageError

if TYPE_CHECKING:
    from pathcalc.case import Case
    from pathcalc.path.solution import Solution

MISSED = 1
OUTCOMES = {
    0: "well",
    MISSED: "with a limit or check missed",
    2: "not to be read or written",
    3: "invalid",
    4: "without a solution",
    5: "ended by an internal error",
}


@click.command("solve", short_help=COMMANDS["solve"])
@click.argument("paths", nargs=-1, required=True, type=PATH, metavar="PATH...")
@click.option("--json", "as_json", is_flag=True, help="Print the results as JSON, in SI units.")
@click.option("--report", "formats", metavar="FORMAT,...", help="Write reports: html, md, pdf, or several.")
@click.option("-o", "--output", type=click.Path(), metavar="DIR", help="Folder of the reports, by default reports/.")
@click.option("--template", type=click.Path(), metavar="DIR", help="Folder with your own templates, style and logo.")
@click.option("--words", type=click.Path(), metavar="FILE", help="Catalogue (TOML) of another language of the reports.")
@click.option("--since", metavar="EARLIER", help="Tell in the report what changed since a case or results file.")
@click.option("--paper", type=click.Choice(PAPERS), default=PAPERS[0], show_default=True, help="Sheet of the PDF.")
@root_option
@loudness
@click.pass_obj
def command(
    talk: Talk,
    paths: tuple[str, ...],
    as_json: bool,
    formats: str | None,
    output: str | None,
    template: str | None,
    words: str | None,
    since: str | None,
    paper: str,
    root: str | None,
) -> int:
    """Solve cases: a summary or JSON on standard output, and reports.

    A PATH is a file, a folder (every *.yaml below it that begins with the key pathcalc) or - for standard input.
    One file gives one JSON object; a folder or several PATHs give a list of those that have a solution. A report is
    called as the case's id, the folders of the id kept; over several cases there is an index, too. -o alone writes
    html,md. pdf needs an installed browser of the Chromium family; PATHCALC_BROWSER names one. EARLIER is a case, a
    results file or REVISION:PATH of a checkout.
    """
    reports = Reports.asked(formats, output, template, paper)
    reports.words = asked_words(words, reports, talk)
    inputs = gather(paths, talk, root)
    if since is not None and (inputs.many or not reports.formats):
        raise UsageError("--since is of the report of one case; name one, and add --report or -o")
    codes = Solving(talk, root, as_json, reports, since).all(inputs)
    unwritten = 0
    if inputs.many and codes:
        places, failed = reports.write_index()
        for place in places:
            talk.note(f"index: {place}")
        if failed:
            talk.error(failed)
            unwritten = 2
    if inputs.many:
        counts = [f"{codes.count(code)} {text}" for code, text in OUTCOMES.items() if code in codes]
        talk.note(f"{len(codes)} case{'' if len(codes) == 1 else 's'}: {', '.join(counts) or 'none'}")
    return max([inputs.code, unwritten, *codes])


class Solving:
    """One run over the cases of a command line."""

    def __init__(self, talk: Talk, root: str | None, as_json: bool, reports: Reports, since: str | None = None) -> None:
        self.talk, self.root, self.as_json, self.reports, self.since = talk, root, as_json, reports, since
        self.printed = 0

    def all(self, inputs: Inputs) -> list[int]:
        """Exit code of every case; a bad one does not stop the others."""
        as_list = self.as_json and inputs.many
        codes: list[int] = []
        if as_list:
            write_utf8("[")
        for item in inputs.items:
            try:
                codes.append(self.one(item, inputs.many))
            except BrokenPipeError:
                raise
            except Exception as error:
                self.reports.failed(item, self.root, error, None)
                codes.append(report_error(error, self.talk, item.shown))
        if as_list:
            write_utf8("\n]" if self.printed else "]")
        return codes

    def one(self, item: Input, many: bool) -> int:
        """Solve one case, print it and write its reports; the exit code."""
        from pathcalc.path.solution import solve

        case = item.load(self.root)
        self.reports.reserve(case, item.shown)
        try:
            solution = solve(case)
            result = solution.to_dict()
        except NoSolutionError as error:
            self.talk.line(str(_finding(case, item, error)))
            self.reports.failed(item, self.root, error, case)
            return error.exit_code
        text = self._text(solution, result, many)
        changes = None
        if self.since is not None:
            from pathcalc.library.compare_sides import changes_since

            changes = changes_since(self.since, solution, self.root)
        written, failed = self.reports.write(solution, case, changes)
        self._print(text, written, many)
        missed = _missed(solution, result)
        for line in missed:
            self.talk.error(f"{item.shown}: {line}")
        if failed:
            self.talk.error(f"{item.shown}: {failed}")
        return max(2 if failed else 0, MISSED if missed else 0)

    def _text(self, solution: Solution, result: dict[str, Any], many: bool) -> str:
        if self.as_json:
            text = json_text(result)
            return "  " + text.replace("\n", "\n  ") if many else text
        if self.talk.quiet:
            return ""
        from pathcalc.cli.summary import summary

        return summary(solution, verbose=self.talk.verbose)

    def _print(self, text: str, written: list[str], many: bool) -> None:
        if self.as_json:
            from sys import stdout

            lead = ",\n" if self.printed else "\n"
            if many:
                stdout.flush()
                stdout.buffer.write((lead + text).encode())
            else:
                write_utf8(text)
            for place in written:
                self.talk.note(f"report: {place}")
        elif text:
            from pathcalc.cli.talk import write

            places = "".join(f"Report: {place}\n" for place in written)
            write(("\n" if self.printed else "") + text + places)
        self.printed += 1


def _missed(solution: Solution, result: dict[str, Any]) -> list[str]:
    """What was not met, a line each; limits in the case's units."""
    lines = []
    if not all(row["passed"] for row in result["limits"]):
        from pathcalc.cli.tables import plain
        from pathcalc.report.context import Context
        from pathcalc.report.units import kind_of

        ctx = Context(solution)
        for row in result["limits"]:
            if row["passed"]:
                continue
            kind = kind_of(row["quantity"])
            if row["value"] is None:
                lines.append(plain(f"limit missed: {row['quantity']} has no value in this state"))
                continue
            low = row["min"] is not None and row["value"] < row["min"]
            bound = f"at least {ctx.brief(kind, row['min'])}" if low else f"at most {ctx.brief(kind, row['max'])}"
            lines.append(plain(f"limit missed: {row['quantity']} = {ctx.measure(kind, row['value'])}, not {bound}"))
    if not all(row["passed"] for row in result["checks"]):
        from pathcalc.path.checks import meaning
    for row in result["checks"]:
        if not row["passed"]:
            at = f" at {row['at']}" if row["at"] else ""
            figures = f"{row['value']:.3g} against {row['tolerance']:.2g}"
            lines.append(f"check failed: {row['name']}{at}: {figures}; {meaning(row['name'])}")
    return lines


def _finding(case: Case, item: Input, error: NoSolutionError) -> Finding:
    from pathcalc.case.places import place_of

    trouble = error.trouble
    file, line, column = place_of(case, trouble.at) or (item.shown, 1, 1)
    at = f"{trouble.at}: " if trouble.at else ""
    return Finding(file, line, column, f"{at}{trouble.text}; {trouble.remedy}", trouble.code)
