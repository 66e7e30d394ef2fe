"""The command line: ``python -m app``.

    python -m app [serve]            the local web application
    python -m app examine FILE       findings of a problem document, or of JSON Lines of them
    python -m app construct FILE     a connection with the problem's orbits, and its verification record
    python -m app check FILE         certificates of findings, or a connection, checked against their problem
    python -m app schema NAME        JSON Schema of a document or result

Results go to standard output, everything else to standard error.  Exit status: 0 done, 1 input refused, 2 wrong
command line, 3 out of time.  Modules that take time to import are imported by the commands that need them.
"""

import argparse
import json
import signal
import sys
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from pathlib import Path
from typing import IO, TYPE_CHECKING

from app import PROGRAM
from app.errors import Malformed, NotFound, OutOfTime, Place, PolewrightError, Refused, TooLarge

if TYPE_CHECKING:
    from app.findings.findings import Findings
    from app.local.problem import Problem

DONE, REFUSED, OUT_OF_TIME = 0, 1, 3
LARGEST_INPUT = 64 * 1024 * 1024

_EXAMPLES = """examples:
  python -m app                                    serve the page on 127.0.0.1 and open it
  python -m app examine problem.json               findings as text
  python -m app examine --type 21,111,111          the same for generic eigenvalues of these multiplicities
  python -m app examine --walls --type 21,111,111  with the walls between eigenvalues where the verdict changes
  python -m app examine --json - < problem.json    findings as JSON
  python -m app examine many.jsonl                 one document a line in, one result a line out
  python -m app construct --type 21,111,111        matrices, exact where possible, with their checks
  python -m app check findings-and-problem.json    {"problem": …, "findings": …}
  python -m app check matrices-and-problem.json    {"problem": …, "connection": …}
  python -m app schema problem                     JSON Schema of a problem document
"""


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command; returns the exit status."""
    given = _parser().parse_args(arguments)
    try:
        status: int = given.run(given)
        sys.stdout.flush()
    except PolewrightError as error:
        _complain(error, as_json=getattr(given, "json", False))
        return OUT_OF_TIME if isinstance(error, OutOfTime) else REFUSED
    except BrokenPipeError:
        # the reader of our output has gone; there is nobody left to tell
        sys.stderr.close()
        return DONE
    except KeyboardInterrupt:
        return 130
    return status


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="python -m app",
        description="Existence, dimension and structure of linear differential systems with prescribed local data.",
        epilog=_EXAMPLES,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )
    parser.add_argument("--version", action="version", version=PROGRAM)
    _add_serving(parser)
    parser.set_defaults(run=_serve)
    commands = parser.add_subparsers(title="commands", metavar="COMMAND")

    serving = commands.add_parser("serve", help="the local web application (also without any command)")
    _add_serving(serving)
    serving.set_defaults(run=_serve)

    examining = commands.add_parser("examine", help="findings of a problem")
    examining.add_argument("file", nargs="?", default="-", metavar="FILE", help="document or JSON Lines; - reads input")
    examining.add_argument("--type", dest="shorthand", metavar="SHORTHAND", help="a type, for example 21,111,111")
    examining.add_argument("--json", action="store_true", help="findings as JSON")
    examining.add_argument("--walls", action="store_true", help="walls and closures too (they take longer)")
    examining.set_defaults(run=_examine)

    building = commands.add_parser("construct", help="a connection for a problem, verified")
    building.add_argument("file", nargs="?", default="-", metavar="FILE", help="problem document; - reads input")
    building.add_argument("--type", dest="shorthand", metavar="SHORTHAND", help="a type, for example 21,111,111")
    building.add_argument("--numeric", action="store_true", help="a floating point directly on the orbits")
    building.add_argument("--seed", type=int, default=0, metavar="N", help="of values and starts (default 0)")
    building.add_argument("--time-limit", type=float, default=60.0, metavar="S", help="in seconds (default 60)")
    building.add_argument("--json", action="store_true", help="the connection as JSON")
    building.set_defaults(run=_construct)

    checking = commands.add_parser("check", help="check findings, or a connection, against their problem")
    checking.add_argument("file", metavar="FILE", help='{"problem": …, "findings": …}; - reads input')
    checking.set_defaults(run=_check)

    describing = commands.add_parser("schema", help="JSON Schema of a document or result")
    describing.add_argument("name", metavar="NAME", help="problem, findings, connection or error")
    describing.set_defaults(run=_schema)
    return parser


def _add_serving(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("--port", type=int, default=None, metavar="N", help="port on 127.0.0.1 (default 8400)")
    parser.add_argument("--data", type=Path, default=None, metavar="DIR", help="folder that keeps the desk")
    parser.add_argument("--no-browser", action="store_true", help="do not open a browser")


def _serve(given: argparse.Namespace) -> int:
    from app.web.serve import serve

    return serve(port=given.port, data=given.data, open_browser=not given.no_browser)


def _examine(given: argparse.Namespace) -> int:
    if given.shorthand is not None:
        from app.local.shorthand import problem_from_shorthand

        return _print_one(problem_from_shorthand(given.shorthand), given)
    with _opened(given.file) as stream:
        first, second = _two_lines(stream)
        if second and _is_object(first):
            return _print_lines(_chained((first, second), stream), given)
        whole = first + second + _rest_of(stream, len(first) + len(second))
    return _examine_whole(whole, given)


def _examine_whole(whole: bytes, given: argparse.Namespace) -> int:
    """One document, or JSON Lines when the whole is no JSON but a line of it is an object."""
    from app.local.document import read_document

    try:
        problem = read_document(whole)
    except (Malformed, TooLarge):
        lines = [line for line in whole.splitlines(keepends=True) if line.strip()]
        if len(lines) > 1 and any(_is_object(line) for line in lines):
            return _print_lines(iter(lines), given)
        raise
    return _print_one(problem, given)


def _print_one(problem: "Problem", given: argparse.Namespace) -> int:
    from app.findings.findings import examine
    from app.findings.text import findings_text

    findings = examine(problem)
    print(_as_json(findings, given, indent=2) if given.json else findings_text(findings).rstrip("\n"))
    if given.walls and not given.json:
        from app.findings.walls_json import walls_text

        print(walls_text(problem).rstrip("\n"))
    return DONE


def _print_lines(lines: Iterator[bytes], given: argparse.Namespace) -> int:
    """One JSON result for every line that is not blank; a refused line does not end the run."""
    from app.findings.findings import examine
    from app.local.document import read_document

    status = DONE
    for line in lines:
        if not line.strip():
            continue
        try:
            result = _as_json(examine(read_document(line)), given)
        except PolewrightError as error:
            result = json.dumps({"error": error.as_json()}, ensure_ascii=False)
            status = REFUSED
        print(result, flush=True)
    return status


def _as_json(findings: "Findings", given: argparse.Namespace, indent: int | None = None) -> str:
    found = findings.as_json()
    if given.walls:
        from app.findings.walls_json import walls_json

        found["walls"] = walls_json(findings.problem)["walls"]
    return json.dumps(found, ensure_ascii=False, indent=indent)


def _construct(given: argparse.Namespace) -> int:
    from app.connection.construction import construct
    from app.connection.text import construction_json, construction_text

    if given.shorthand is not None:
        from app.local.shorthand import problem_from_shorthand

        problem = problem_from_shorthand(given.shorthand)
    else:
        from app.local.document import read_document

        with _opened(given.file) as stream:
            problem = read_document(_rest_of(stream, 0))
    with _alarm(given.time_limit):
        built = construct(problem, numeric=given.numeric, seed=given.seed, time_limit=given.time_limit)
    if given.json:
        print(json.dumps(construction_json(built), ensure_ascii=False, indent=2))
    else:
        print(construction_text(built).rstrip("\n"))
    if built.connection is not None and not built.verified:
        print("Not every check of the verification record holds.", file=sys.stderr)
    return DONE


@contextmanager
def _alarm(seconds: float) -> Iterator[None]:
    """Stop what does not look at its time limit, half a second after it, where the system has timers of this kind."""
    if not hasattr(signal, "setitimer"):
        yield
        return

    def stop(_number: int, _frame: object) -> None:
        raise OutOfTime(f"The time limit of {seconds:g} s ran out.")

    before = signal.signal(signal.SIGALRM, stop)
    signal.setitimer(signal.ITIMER_REAL, max(seconds, 0.0) + 0.5)
    try:
        yield
    finally:
        signal.setitimer(signal.ITIMER_REAL, 0)
        signal.signal(signal.SIGALRM, before)


def _check(given: argparse.Namespace) -> int:
    from app.findings.recheck import recheck
    from app.local.document import parse_json, problem_from_json

    with _opened(given.file) as stream:
        data = parse_json(_rest_of(stream, 0))
    if not isinstance(data, dict) or set(data) not in ({"problem", "findings"}, {"problem", "connection"}):
        expected = '{"problem": …, "findings": …} or {"problem": …, "connection": …}'
        raise Refused("The file cannot be checked.", (Place("", "this is no such pair", expected),))
    problem = problem_from_json(data["problem"])
    if "connection" in data:
        return _check_connection(problem, data["connection"])
    checks = recheck(problem, data["findings"])
    for one in checks:
        print(f"{'holds' if one.holds else 'FAILS'}  {one.claim}{f'  ({one.figure})' if one.figure else ''}")
    return DONE if all(one.holds for one in checks) else REFUSED


def _check_connection(problem: "Problem", data: object) -> int:
    """A verification record made anew for a connection that anybody may have written."""
    from app.connection.document import connection_from_json
    from app.connection.verification import verify
    from app.progress import Unlimited

    record = verify(problem, connection_from_json(data), Unlimited())
    for one in record:
        print(f"{'holds' if one.holds else 'FAILS'}  {one.check}: {one.figure}")
    return DONE if all(one.holds for one in record) else REFUSED


def _schema(given: argparse.Namespace) -> int:
    from app.findings.schema import schema

    print(json.dumps(schema(given.name), ensure_ascii=False, indent=2))
    return DONE


def _opened(name: str) -> IO[bytes]:
    if name == "-":
        return sys.stdin.buffer
    try:
        return Path(name).open("rb")
    except (OSError, ValueError) as error:
        raise NotFound(f"The file {name} cannot be read: {getattr(error, 'strerror', None) or error}.") from error


def _two_lines(stream: IO[bytes]) -> tuple[bytes, bytes]:
    """The first line that is not blank, and the next one: enough to see JSON Lines before the input ends."""
    found: list[bytes] = []
    while len(found) < 2 and (line := stream.readline(LARGEST_INPUT)):
        if line.strip():
            found.append(line)
    first, second = (*found, b"", b"")[:2]
    return first, second


def _chained(lines: tuple[bytes, ...], stream: IO[bytes]) -> Iterator[bytes]:
    yield from lines
    while line := stream.readline(LARGEST_INPUT):
        yield line


def _rest_of(stream: IO[bytes], already: int) -> bytes:
    rest = stream.read(LARGEST_INPUT - already + 1)
    if already + len(rest) > LARGEST_INPUT:
        raise TooLarge(f"The input is larger than {LARGEST_INPUT // 1024**2} MB.")
    return rest


def _is_object(line: bytes) -> bool:
    """Whether a line is a complete JSON object by itself."""
    try:
        return isinstance(json.loads(line), dict)
    except (ValueError, RecursionError):
        return False


def _complain(error: PolewrightError, *, as_json: bool) -> None:
    if as_json:
        print(json.dumps({"error": error.as_json()}, ensure_ascii=False), file=sys.stderr)
        return
    print(error.message, file=sys.stderr)
    for place in error.places:
        expected = f" (expected: {place.expected})" if place.expected else ""
        print(f"  {place.at or '(whole document)'}: {place.message}{expected}", file=sys.stderr)


if __name__ == "__main__":
    sys.exit(main())
