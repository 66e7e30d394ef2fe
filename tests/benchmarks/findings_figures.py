"""Figures of examining problems, in this process and from the command line."""

import json
import random
import resource
import subprocess
import sys
import tempfile
from pathlib import Path

from app.errors import Refused
from app.findings.findings import examine
from app.local.document import problem_from_json, read_document
from app.local.shorthand import problem_from_shorthand
from app.local.writer import canonical_text
from tests.benchmarks.timing import Figure, Time, median, middle, show, timed
from tests.existence import random_data

SMALL = ["11,11,11,11", "21,111,111", "(1)(1),11,11", "42,222,1^6", "(11)(1),(1)(1)(1),21", "1^6,1^6,51,51,33"]
TWELVE_LEGS = ",".join(["1^100"] * 12)
HYPERGEOMETRIC = "1^100,1^100,99 1"


def document_of(shorthand: str) -> str:
    return canonical_text(problem_from_shorthand(shorthand))


def examine_document(text: str) -> object:
    return examine(read_document(text)).as_json()


def mixed_documents(count: int) -> list[str]:
    """Documents of many kinds: random ones with special values, and generic types."""
    generator = random.Random(1)
    texts = [document_of(shorthand) for shorthand in SMALL]
    while len(texts) < count:
        drawn = random_data.poles(generator, irregular=0.4, count=(1, 4))
        if drawn is None:
            continue
        document = random_data.document(drawn)
        try:
            problem_from_json(document)
        except Refused:
            continue
        texts.append(json.dumps(document) + "\n")
    return texts


def command(*arguments: str, given: bytes = b"") -> Time:
    """One run of the command line, start included."""

    def children() -> float:
        usage = resource.getrusage(resource.RUSAGE_CHILDREN)
        return usage.ru_utime + usage.ru_stime

    def run() -> None:
        subprocess.run([sys.executable, "-m", "app", *arguments], input=given, capture_output=True, check=True)

    worked = children()
    clock = timed(run).clock
    return Time(clock, children() - worked)


def figures() -> list[Figure]:
    small = [document_of(shorthand) for shorthand in SMALL]
    found = [
        Figure(f"examine a document, {shorthand}", median(lambda text=text: examine_document(text)), 0.003)  # type: ignore[misc]
        for shorthand, text in zip(SMALL, small, strict=True)
    ]
    star, rigid = document_of(TWELVE_LEGS), document_of(HYPERGEOMETRIC)
    found.append(Figure("examine 12 legs of rank 100, generic symbols", median(lambda: examine_document(star), 7), 0.1))
    problem = problem_from_shorthand(HYPERGEOMETRIC)
    found.append(Figure("examine 1^100,1^100,99 1 with descent", median(lambda: examine(problem), 9), 0.05))
    found.append(Figure("the same from text to JSON", median(lambda: examine_document(rigid), 9)))
    lines = "".join(mixed_documents(1000)).encode()
    found.append(
        Figure(
            "1,000 mixed documents as JSON Lines",
            middle([command("examine", "--json", "-", given=lines) for _ in range(3)]),
            5,
        )
    )
    with tempfile.TemporaryDirectory() as folder:
        file = Path(folder) / "problem.json"
        file.write_text(small[1], encoding="utf-8")
        times = [command("examine", str(file), "--json") for _ in range(9)]
        found.append(Figure("examine one document from the command line", middle(times), 0.25))
    return found


def growth() -> None:
    """How the time grows with the rank and with the number of vertices."""
    print(f"\n{'type':34} {'vertices':>9} {'clock, ms':>10} {'processor, ms':>14}")
    rows = [(f"1^{n},1^{n},{n - 1} 1 (rigid)", f"1^{n},1^{n},{n - 1} 1") for n in (5, 10, 20, 40, 80, 160, 320)]
    rows += [(f"{legs} poles of type 1^25", ",".join(["1^25"] * legs)) for legs in (3, 6, 12, 24, 48)]
    rows += [(f"one pole of {n} blocks, two log", "(1)" * n + f",{n - 1} 1,{n - 1} 1") for n in (5, 10, 20, 40, 80)]
    for name, shorthand in rows:
        problem = problem_from_shorthand(shorthand)
        findings = examine(problem)
        assert findings.quiver is not None
        found = median(lambda p=problem: examine(p), 5)  # type: ignore[misc]
        vertices = len(findings.quiver.vertices)
        print(f"{name:34} {vertices:9} {found.clock * 1e3:10.1f} {found.processor * 1e3:14.1f}")


if __name__ == "__main__":
    show(figures())
    growth()
