"""Polewright: existence, dimension and structure of linear differential systems with prescribed local data.

The package is built as a house with one direction of imports.  Every folder is a room on a floor and may use
only rooms on lower floors:

    0  errors, progress              refusals, progress and stop protocol
    1  exact                         numbers, relations, linear algebra, all exact
    2  local                         formal types, problems, their documents, the shorthand
    3  roots                         quiver, bilinear form, reduction by reflections, Dynkin types
    4  existence, operations         the decisions with their certificates; operations on problems
    5  connection                    explicit connections, exact and numerical, with their verification record
    7  findings, drawing             the whole result of a problem; geometry and SVG of diagrams
    8  jobs                          long computations in processes of their own
    9  desk                          the working session, kept in SQLite
    10 web                           pages, HTTP interface, guard
    11 __main__                      command line

Rooms on one floor do not import each other; ``tests/test_floors.py`` enforces this.
"""

NAME = "polewright"
VERSION = "0.1"
PROGRAM = f"{NAME} {VERSION}"
