"""Server time of one edit of the page: form to fragments, in this process, store and all."""

import json
import re
import tempfile
from pathlib import Path

from starlette.testclient import TestClient

from app.web.application import Settings, create_application
from tests.benchmarks.timing import Figure, Time, percentile, show, timed

TYPES = {"rank 3": "21,111,111", "rank 6": "1^6,1^6,51", "rank 100, 1,200 eigenvalues": ",".join(["1^100"] * 12)}
TARGETS = {"rank 3": 0.04, "rank 6": 0.04, "rank 100, 1,200 eigenvalues": 0.15}


def edit_times(shorthand: str, count: int) -> list[Time]:
    """Times of single edits of one eigenvalue after another; the page's marks are kept as a browser keeps them."""
    with tempfile.TemporaryDirectory() as folder:
        application = create_application(Settings(data=Path(folder)))
        with TestClient(application, base_url="http://127.0.0.1:8400") as client:
            headers = {"accept": "application/json"}
            address = str(client.get("/").url.path)
            target = address if address != "/" else "/desk"
            answer = client.post(target, data={"shorthand": shorthand}, headers=headers).json()
            fields = re.findall(r'name="(eigenvalue\.e\d+\.value)"', answer["fragments"]["data"]["html"])
            marks = {name: fragment["mark"] for name, fragment in answer["fragments"].items()}
            found = []
            for k in range(count + 1):
                data = {
                    fields[k % len(fields)]: f"{k + 3}/7",
                    "revision": str(answer["revision"]),
                    "shown": json.dumps(marks),
                }
                responses = []
                found.append(timed(lambda: responses.append(client.post(target, data=data, headers=headers))))  # noqa: B023
                answer = responses[0].json()
                marks.update({name: fragment["mark"] for name, fragment in answer["fragments"].items()})
            return found[1:]


def figures() -> list[Figure]:
    return [
        Figure(f"one edit of the page, {name}, p95", percentile(edit_times(shorthand, 40), 0.95), TARGETS[name])
        for name, shorthand in TYPES.items()
    ]


if __name__ == "__main__":
    show(figures())
