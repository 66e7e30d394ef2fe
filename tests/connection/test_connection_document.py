"""The document of a connection: reads back, is bounded, names every fault."""

import json

import pytest

from app.connection.connection import Connection
from app.connection.construction import construct
from app.connection.document import connection_document, connection_from_json, connection_text, read_connection
from app.errors import Malformed, Refused, TooLarge
from app.local.shorthand import problem_from_shorthand

EXAMPLE = {
    "format": "polewright-connection/1", "kind": "exact", "rank": 1, "symbols": ["a"], "accessory": [],
    "poles": [{"at": "0", "coefficients": [[["a"]]]}, {"at": "infinity", "coefficients": [[["-a"]]]}],
    "verification": [{"check": "sum of residues", "holds": True, "figure": "0"}],
}  # fmt: skip


@pytest.mark.parametrize("numeric", [False, True])
@pytest.mark.parametrize("shorthand", ["11,11,11", "21,21,21,21", "(1)(1),11,11", "(1)(1),(1)(1)"])
def test_what_is_written_reads_back(shorthand, numeric):
    connection = construct(problem_from_shorthand(shorthand), numeric=numeric).connection
    text = connection_text(connection)
    again = read_connection(text)
    assert again == connection
    assert connection_text(again) == text


def test_the_example():
    connection = connection_from_json(EXAMPLE)
    assert isinstance(connection, Connection)
    written = dict(connection_document(connection))
    assert {key: written[key] for key in EXAMPLE} == EXAMPLE


@pytest.mark.parametrize("entry", ["0.5", "-1e-3", "1.5-2e-3*i", "2.0*i", "-0.25+1e10*i", "1.", ".5"])
def test_floating_entries(entry):
    negative = {"1.": "-1.0", ".5": "-0.5"}.get(entry)
    data = {**EXAMPLE, "kind": "numerical", "symbols": []}
    data["poles"] = [{"at": "0", "coefficients": [[[entry]]]}]
    with pytest.raises(Refused, match="add up"):
        connection_from_json(data)
    if negative:
        data["poles"].append({"at": "1", "coefficients": [[[negative]]]})
        assert connection_from_json(data).kind == "numerical"


def faults(**changes) -> set[str]:
    with pytest.raises(Refused) as caught:
        connection_from_json({**EXAMPLE, **changes})
    return {place.at for place in caught.value.places}


def poles(*entries):
    return [{"at": str(k), "coefficients": [[[entry]]]} for k, entry in enumerate(entries)]


@pytest.mark.parametrize(
    ("changes", "places"),
    [
        ({"format": "other"}, {"/format"}),
        ({"kind": "rough"}, {"/kind"}),
        ({"rank": True}, {"/rank"}),
        ({"rank": 0}, {"/rank"}),
        ({"rank": 1000}, {"/rank"}),
        ({"symbols": ["a", "a", "i", 3]}, {"/symbols/1", "/symbols/2", "/symbols/3"}),
        ({"accessory": ["b"]}, {"/accessory/0"}),
        ({"unknown": 1}, {"/unknown"}),
        ({"poles": []}, {"/poles"}),
        ({"poles": [{"at": "0"}]}, {"/poles/0"}),
        ({"poles": [{"at": "a+1", "coefficients": [[["0"]]]}]}, {"/poles/0/at"}),
        ({"poles": [{"at": "0", "coefficients": [[["a", "a"]]]}]}, {"/poles/0/coefficients/0/0"}),
        ({"poles": [{"at": "0", "coefficients": [[["a"], ["a"]]]}]}, {"/poles/0/coefficients/0"}),
        ({"poles": poles("a/0", "c", 1)}, {f"/poles/{k}/coefficients/0/0/0" for k in range(3)}),
        ({"poles": [*poles("a"), *poles("-a")]}, {"/poles/1/at"}),
        ({"poles": poles("a", "a")}, {"/poles"}),
        ({"kind": "numerical", "poles": poles("1", "one")}, {"/poles/1/coefficients/0/0/0"}),
        ({"verification": [{"check": "x"}]}, {"/verification/0"}),
        ({"values": {"a": "x"}}, {"/values/a"}),
        ({"method": 1}, {"/method"}),
    ],
)
def test_faults_have_places(changes, places):
    assert faults(**changes) == places


def test_all_faults_together():
    assert faults(rank="1", kind=0, symbols=None) >= {"/rank", "/kind", "/symbols"}


def test_text_faults():
    with pytest.raises(Malformed):
        read_connection("{")
    with pytest.raises(TooLarge):
        read_connection(" " * 3_000_000)
    text = json.dumps(EXAMPLE).replace('"rank": 1', '"rank": 1, "rank": 1')
    with pytest.raises(Refused):
        read_connection(text)


def test_work_is_bounded():
    entry = "1/(a+1)" + "".join(f"+1/(a+{k})" for k in range(2, 300))
    assert faults(poles=poles(entry, "0")) == {"/poles/0/coefficients/0/0/0"}
