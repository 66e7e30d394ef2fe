"""The shape of findings and errors as JSON; their JSON Schemas are written from these types.

Numbers of the problem's field are strings in the grammar of numbers; vectors are in the order of the vertices of the
quiver that stands beside them.
"""

from typing import Literal, NotRequired

from typing_extensions import TypedDict


class FuchsJson(TypedDict):
    """Whether the Fuchs relation holds, and by how much it fails."""

    holds: bool
    defect: str


class SolvedJson(TypedDict):
    """The value forced for "*": its place and what it is."""

    at: str
    value: str


class OrbitJson(TypedDict):
    """Dimension of the orbit at a pole; largest slope of a difference of exponents there."""

    pole: int
    dimension: int
    slope: str


class FormalJson(TypedDict):
    """Figures of the formal type at a pole: slopes with multiplicities, vertices of the Newton polygon."""

    pole: int
    irregularity: int
    slopes: list[tuple[str, int]]
    newton_polygon: list[tuple[int, int]]


class VertexJson(TypedDict):
    """A vertex of the quiver; ``leg`` is the place along its leg and stands at leg vertices only."""

    id: str
    role: Literal["core", "leg"]
    pole: int
    block: int
    leg: NotRequired[int]
    dimension: int
    parameter: str


class QuiverJson(TypedDict):
    """The quiver: base pole, type of α's support, vertices, edges (two ids and their number)."""

    base: int
    type: str
    vertices: list[VertexJson]
    edges: list[tuple[str, str, int]]


class OrbitVertexJson(TypedDict):
    """A vertex of the diagram of ramified data; ``weight`` is the ramification index of a core vertex, 1 on legs."""

    id: str
    role: Literal["core", "leg"]
    pole: int
    block: int
    leg: NotRequired[int]
    dimension: int
    weight: int


class DiagramJson(TypedDict):
    """The diagram of ramified data: vertices, and the non-zero entries C_ij, i ≤ j, of its symmetric matrix.

    −C_ij is the number of edges (negative for C_ij > 0), (2 − C_ii)/2 that of loops; an entry C_ii that is not listed
    is 0.
    """

    base: int
    vertices: list[OrbitVertexJson]
    entries: list[tuple[str, str, int]]


# written as a call because "class" is a keyword: class of α as a root, and p(α) = 1 − q(α)
RootJson = TypedDict("RootJson", {"class": Literal["real", "isotropic", "anisotropic", "none"], "p": int})


class PartJson(TypedDict):
    """A root of a decomposition, with multiplicity and p."""

    multiplicity: int
    vector: list[int]
    p: int


class GaugeJson(TypedDict):
    """A gauge Σ terms[k]·z^k at a pole."""

    pole: int
    terms: list[list[list[int]]]


class CertificateJson(TypedDict):
    """A certificate; which entries stand depends on its kind.  Those from ``pole`` on belong to ramified data."""

    kind: Literal[
        "reflections",
        "decomposition",
        "not-a-root",
        "fuchs",
        "rigidity-excess",
        "jordan-blocks",
        "free-residue",
        "residue-sum",
        "large-eigenspace",
    ]
    vertices: NotRequired[list[VertexJson]]
    edges: NotRequired[list[tuple[str, str, int]]]
    steps: NotRequired[list[str | list[str]]]
    reduced: NotRequired[list[int]]
    parts: NotRequired[list[PartJson]]
    criterion: NotRequired[str]
    failure: NotRequired[str]
    defect: NotRequired[str]
    pole: NotRequired[int]
    slope: NotRequired[str]
    other: NotRequired[int | None]
    counts: NotRequired[list[int]]
    second: NotRequired[int | None]
    gauges: NotRequired[list[GaugeJson]]
    columns: NotRequired[list[list[int]]]
    choices: NotRequired[list[list[int]]]
    dimension: NotRequired[int]
    index: NotRequired[int]


class VerdictJson(TypedDict):
    """A verdict: exists (null when undecided), how sure, why, and what proves it."""

    exists: bool | None
    status: Literal["proved", "refuted", "criterion", "evidence", "open"]
    reason: str
    certificate: CertificateJson | None


class ResonanceJson(TypedDict):
    """Two eigenvalues of one block and their integer difference, second minus first."""

    pole: int
    block: int
    values: tuple[str, str]
    difference: int


class WallJson(TypedDict):
    """A wall: the equation that defines it, its root, what happens there, the present value, whether that is 0."""

    equation: str
    vector: list[int]
    criterion: str
    value: str
    holds: bool


class DescentJson(TypedDict):
    """A step of the descent."""

    vertex: str | list[str]
    pairing: int
    parameter: str
    rank: int
    operation: str


class FamilyJson(TypedDict):
    """A published name that applies, with its source."""

    name: str
    source: str


class FindingsJson(TypedDict):
    """The result of examining a problem."""

    program: str
    name: str
    rank: int
    dimension: int
    rigidity_index: int
    fuchs: FuchsJson
    solved: SolvedJson | None
    orbits: list[OrbitJson]
    formal: list[FormalJson]
    quiver: QuiverJson | None
    diagram: DiagramJson | None
    root: RootJson | None
    additive: VerdictJson | None
    multiplicative: VerdictJson | None
    resonances: list[ResonanceJson]
    walls: list[WallJson] | None
    descent: list[DescentJson]
    families: list[FamilyJson]


class PlaceJson(TypedDict):
    """One fault: JSON pointer, what is wrong, what would be right."""

    at: str
    message: str
    expected: str


class ErrorBodyJson(TypedDict):
    """What went wrong."""

    kind: Literal[
        "malformed", "refused", "too_large", "not_found", "not_allowed", "forbidden", "out_of_time", "busy", "failed"
    ]
    message: str
    places: list[PlaceJson]


class ErrorJson(TypedDict):
    """The one error shape of every door."""

    error: ErrorBodyJson
