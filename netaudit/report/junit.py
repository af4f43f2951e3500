"""JUnit XML: a suite a board, a test case a part or expectation, and one for what belongs to the board as a whole.

No standards body keeps this format.  What is written fits the families of schemas in use: counts on every level,
``properties`` first, at most one of failure, error and skipped in a case, ``system-out`` and ``system-err`` last.
A failure is a finding that counts; an error is what netaudit could not decide; a part without a model is skipped.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from xml.sax.saxutils import escape, quoteattr

from netaudit.audit.batch import Batch, BoardResult
from netaudit.audit.records import Audit, Coverage
from netaudit.circuit.circuit import Board, Expectation
from netaudit.failure import printable
from netaudit.finding import Finding
from netaudit.quantities.write import engineering
from netaudit.report.provenance import CAUTION, policies, timestamp

_UNDECIDED = frozenset({"point/none-found"})
_UNITS = {"voltage": "V", "current": "A", "power": "W", "temperature": "degC"}


@dataclass
class _Case:
    """A test case: what counts against it, what could not be decided, and why it was skipped."""

    name: str
    failures: list[Finding] = field(default_factory=list)
    errors: list[str] = field(default_factory=list)
    skipped: str = ""


def render(batch: Batch) -> str:
    """The document."""
    own = batch.comparison.own if batch.comparison is not None else ()
    boards = [*batch.boards, *([_project((*batch.findings, *own), batch)] if batch.findings or own else [])]
    suites = [_suite(board, number, batch) for number, board in enumerate(boards)]
    counts = {name: sum(s[0][name] for s in suites) for name in ("tests", "failures", "errors")}
    lines = ['<?xml version="1.0" encoding="UTF-8"?>', f"<testsuites{_attributes({'name': 'netaudit', **counts})}>"]
    for _, text in suites:
        lines += text
    return "\n".join([*lines, "</testsuites>"]) + "\n"


def _project(findings: tuple[Finding, ...], batch: Batch) -> BoardResult:
    """Findings that belong to no board stand in a suite of their own."""
    empty = Audit(Board("project", "", (), (), True), "", (), findings, (), Coverage(0, 0, 0, (), 0, 0, 0), True)
    return BoardResult("project", empty, batch.failed, fail_on=batch.boards[0].fail_on if batch.boards else "error")


def _suite(board: BoardResult, number: int, batch: Batch) -> tuple[Mapping[str, int], list[str]]:
    quiet: list[Finding] = []
    broken = board.audit is None
    cases = [_Case("netlist", errors=[board.error])] if broken else list(_cases(board, batch, quiet))
    counts = {
        "tests": len(cases),
        "failures": sum(1 for c in cases if c.failures and not c.errors),
        "errors": sum(1 for c in cases if c.errors),
        "skipped": sum(1 for c in cases if c.skipped and not c.failures and not c.errors),
    }
    about = {"name": board.name, "package": "netaudit", "id": number, "timestamp": timestamp(), "hostname": "localhost"}
    lines = [f"  <testsuite{_attributes({**about, **counts, 'time': '0'})}>", *_properties(board, batch)]
    for case in cases:
        lines += _written(case, board.name)
    said = "\n".join(_line(f) for f in quiet)
    lines += [f"    <system-out>{_text(said)}</system-out>", "    <system-err></system-err>", "  </testsuite>"]
    return counts, lines


def _cases(board: BoardResult, batch: Batch, quiet: list[Finding]) -> Iterable[_Case]:
    """Parts, then expectations, then the board itself; findings that do not count go to ``quiet``."""
    audit = board.audit
    assert audit is not None
    parts = {p.name: _Case(f"{p.name} {p.kind}{f' {p.part}' if p.part else ''}") for p in audit.parts}
    wanted = {(e.place.file, e.place.line): _Case(_expectation(e)) for e in audit.board.expectations}
    whole = _Case("board")
    for name, why in audit.coverage.not_audited.items():
        if name in parts:
            parts[name].skipped = f"not audited: {why}"
    for finding in audit.findings:
        if not batch.counts(board, finding):
            quiet.append(finding)
            continue
        expected = wanted.get((finding.file or "", finding.line or 0)) if finding.rule == "expect/missed" else None
        case = expected or parts.get(finding.device or "", whole)
        if finding.rule in _UNDECIDED:
            case.errors.append(_line(finding))
        else:
            case.failures.append(finding)
    return [*parts.values(), *wanted.values(), whole]


def _expectation(wanted: Expectation) -> str:
    unit = _UNITS[wanted.quantity]
    target = " ".join(wanted.nets) or f"{wanted.device}{f':{wanted.pin}' if wanted.pin else ''}"
    low = engineering(wanted.low, unit) if wanted.low > -1e300 else ""
    high = engineering(wanted.high, unit) if wanted.high < 1e300 else ""
    mode = f" mode {wanted.mode}" if wanted.mode else ""
    return f"expect {wanted.quantity} {target} {low}..{high}{mode}, line {wanted.place.line}"


def _properties(board: BoardResult, batch: Batch) -> list[str]:
    policy = board.audit.policy if board.audit is not None else policies(batch)
    files = board.audit.board.files if board.audit is not None else {}
    every = [("netaudit version", batch.version), ("policy", policy)]
    every += [(f"sha256 {name}", digest) for name, digest in sorted(files.items())] + [("cautions", CAUTION)]
    rows = [f"      <property{_attributes({'name': name, 'value': value})}/>" for name, value in every]
    return ["    <properties>", *rows, "    </properties>"]


def _written(case: _Case, board: str) -> list[str]:
    head = f"    <testcase{_attributes({'name': case.name, 'classname': _class(board), 'time': '0'})}"
    if case.errors:
        inside = _outcome("error", "undecided", case.errors[0], case.errors)
    elif case.failures:
        inside = _outcome("failure", case.failures[0].rule, case.failures[0].message, [_line(f) for f in case.failures])
    elif case.skipped:
        inside = f"      <skipped{_attributes({'message': case.skipped})}/>"
    else:
        return [f"{head}/>"]
    return [f"{head}>", inside, "    </testcase>"]


def _outcome(tag: str, kind: str, message: str, lines: Sequence[str]) -> str:
    return f"      <{tag}{_attributes({'type': kind, 'message': message})}>{_text(chr(10).join(lines))}</{tag}>"


def _class(board: str) -> str:
    """Viewers fold class names at dots: folders become packages."""
    return board.rpartition(".")[0].strip("./").replace("/", ".") or board


def _line(f: Finding) -> str:
    where = f"{f.file}:{f.line}: " if f.file and f.line else ""
    mode = f" [{f.mode}]" if f.mode else ""
    waived = f" (waived: {f.waived.reason})" if f.waived is not None else ""
    return printable(f"{where}{f.level} {f.rule}{mode}: {f.message}{waived}")


def _text(text: str) -> str:
    return escape("\n".join(printable(line) for line in text.split("\n")))


def _attributes(values: Mapping[str, object]) -> str:
    return "".join(f" {name}={quoteattr(printable(str(value)))}" for name, value in values.items())
