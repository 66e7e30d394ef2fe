"""Geometry of diagrams and their SVG.

Called by ``web/``.  It places vertices and writes markup with ids; it refuses to know links, routes, verdicts and
desks.

    geometry.py    the placed diagram, as frozen values
    folding.py     what is drawn one by one, and what only counted
    ring.py        the order of core vertices on their ring
    labels.py      where parameters are written
    layout.py      quiver → placed diagram
    svg.py         placed diagram → SVG
    orbit_layout.py  diagram of ramified data → placed picture, with loops and negative edges
    orbit_svg.py   that picture → SVG
    newton.py      Newton polygon → SVG
    markup.py      pieces of markup that all pictures share
"""
