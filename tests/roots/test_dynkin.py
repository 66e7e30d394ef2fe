"""Names of diagrams against definitions: definiteness by numpy, shapes and bridges by networkx."""

import random

import networkx
import numpy
import pytest

from app.exact.value import ZERO
from app.roots.dynkin import is_affine, type_name
from app.roots.form import bridges, component, is_connected
from app.roots.positive import root_class
from app.roots.quiver import Quiver, Vertex


def quiver_on(graph: "networkx.MultiGraph[int]") -> Quiver:
    """A quiver with all dimensions 1 on a multigraph with vertices 0, 1, …"""
    size = graph.number_of_nodes()
    vertices = tuple(Vertex(f"0.{k}", "core", 0, k, 0, 1, ZERO) for k in range(size))
    counts: dict[tuple[int, int], int] = {}
    for a, b in graph.edges():
        key = (min(a, b), max(a, b))
        counts[key] = counts.get(key, 0) + 1
    return Quiver(0, vertices, tuple((a, b, count) for (a, b), count in sorted(counts.items())))


def everything(quiver: Quiver) -> frozenset[int]:
    return frozenset(range(len(quiver.vertices)))


def arms(*lengths: int) -> "networkx.MultiGraph[int]":
    """A tree with one centre and arms of the given lengths."""
    graph: networkx.MultiGraph[int] = networkx.MultiGraph()
    graph.add_node(0)
    for length in lengths:
        before = 0
        for _ in range(length):
            new = graph.number_of_nodes()
            graph.add_edge(before, new)
            before = new
    return graph


def two_forks(distance: int) -> "networkx.MultiGraph[int]":
    graph: networkx.MultiGraph[int] = networkx.MultiGraph(networkx.path_graph(distance + 1))
    size = distance + 1
    graph.add_edges_from([(0, size), (0, size + 1), (distance, size + 2), (distance, size + 3)])
    return graph


NAMED = {
    "A1": networkx.MultiGraph(networkx.empty_graph(1)),
    "A5": networkx.MultiGraph(networkx.path_graph(5)),
    "D4": arms(1, 1, 1),
    "D7": arms(1, 1, 4),
    "E6": arms(1, 2, 2),
    "E7": arms(1, 2, 3),
    "E8": arms(1, 2, 4),
    "A1^(1)": networkx.MultiGraph([(0, 1), (0, 1)]),
    "A2^(1)": networkx.MultiGraph(networkx.cycle_graph(3)),
    "A6^(1)": networkx.MultiGraph(networkx.cycle_graph(7)),
    "D4^(1)": arms(1, 1, 1, 1),
    "D5^(1)": two_forks(1),
    "D8^(1)": two_forks(4),
    "E6^(1)": arms(2, 2, 2),
    "E7^(1)": arms(1, 3, 3),
    "E8^(1)": arms(1, 2, 5),
}


@pytest.mark.parametrize("name", NAMED)
def test_the_diagrams_of_the_tables(name: str) -> None:
    """Kac, Infinite dimensional Lie algebras (1990), tables Fin and Aff 1, the simply laced ones and A1^(1)."""
    quiver = quiver_on(NAMED[name])
    assert type_name(quiver, everything(quiver)) == name
    assert is_affine(name) == name.endswith("^(1)")


@pytest.mark.parametrize("name", NAMED)
def test_the_name_does_not_depend_on_the_numbering(name: str) -> None:
    generator = random.Random(name)
    graph = NAMED[name]
    order = list(graph.nodes())
    generator.shuffle(order)
    quiver = quiver_on(networkx.relabel_nodes(graph, dict(zip(graph.nodes(), order, strict=True))))
    assert type_name(quiver, everything(quiver)) == name


def kind(graph: "networkx.MultiGraph[int]") -> str:
    """Finite, affine or neither, by the eigenvalues of the Cartan matrix."""
    size = graph.number_of_nodes()
    cartan = 2 * numpy.eye(size) - networkx.to_numpy_array(graph, nodelist=sorted(graph.nodes()))
    smallest = float(numpy.linalg.eigvalsh(cartan)[0])
    return "finite" if smallest > 1e-9 else "affine" if abs(smallest) <= 1e-9 else "neither"


def is_hyperbolic(graph: "networkx.MultiGraph[int]") -> bool:
    """Neither, and every connected subdiagram with one vertex less is finite or affine."""
    for v in graph.nodes():
        smaller = graph.copy()
        smaller.remove_node(v)
        for part in networkx.connected_components(smaller):
            if kind(smaller.subgraph(part)) == "neither":
                return False
    return True


def random_graph(generator: random.Random) -> "networkx.MultiGraph[int]":
    size = generator.randint(2, 8)
    tree = networkx.random_labeled_tree(size, seed=generator.randrange(10**6))
    graph: networkx.MultiGraph[int] = networkx.MultiGraph(tree)
    for _ in range(generator.choice([0, 0, 0, 1, 1, 2])):
        a, b = generator.sample(range(size), 2)
        graph.add_edge(a, b)
    return graph


def test_names_against_the_definitions() -> None:
    generator = random.Random(3)
    seen = {"finite": 0, "affine": 0, "hyperbolic": 0, "indefinite": 0}
    for _ in range(1500):
        graph = random_graph(generator)
        quiver = quiver_on(graph)
        name = type_name(quiver, everything(quiver))
        found = kind(graph)
        if found == "neither":
            found = "hyperbolic" if is_hyperbolic(graph) else "indefinite"
            assert name == found
        else:
            assert is_affine(name) == (found == "affine") and name not in ("hyperbolic", "indefinite")
        seen[found] += 1
    assert min(seen.values()) > 20, seen


def test_bridges_and_components_against_networkx() -> None:
    generator = random.Random(5)
    for _ in range(300):
        graph = random_graph(generator)
        quiver = quiver_on(graph)
        inside = frozenset(generator.sample(range(graph.number_of_nodes()), generator.randint(1, len(graph))))
        part = graph.subgraph(inside)
        simple = networkx.Graph(part)
        single = {frozenset(edge) for edge in networkx.bridges(simple) if part.number_of_edges(*edge) == 1}
        assert {frozenset(edge) for edge in bridges(quiver, inside)} == single
        start = min(inside)
        assert component(quiver, start, inside) == networkx.node_connected_component(simple, start)
        assert is_connected(quiver, inside) == networkx.is_connected(simple)


def test_several_components_are_named_together() -> None:
    graph = networkx.MultiGraph([(0, 1), (1, 2), (3, 4), (3, 4)])
    quiver = quiver_on(graph)
    assert type_name(quiver, everything(quiver)) == "A3 + A1^(1)"


@pytest.mark.parametrize(
    ("name", "vector", "found"),
    [
        ("D4^(1)", (2, 1, 1, 1, 1), "isotropic"),
        ("D4^(1)", (4, 2, 2, 2, 2), "isotropic"),
        ("D4^(1)", (2, 1, 1, 1, 0), "real"),
        ("D4^(1)", (3, 1, 1, 1, 1), "real"),
        ("D4^(1)", (4, 1, 1, 1, 1), "none"),
        ("D4^(1)", (0, 1, 1, 0, 0), "none"),
        ("A1^(1)", (2, 3), "real"),
        ("A1^(1)", (2, 4), "none"),
    ],
)
def test_roots_of_affine_diagrams(name: str, vector: tuple[int, ...], found: str) -> None:
    """Real roots β + nδ and imaginary roots nδ of affine type: Kac (1990), Proposition 6.3."""
    assert root_class(quiver_on(NAMED[name]), vector) == found
