"""Quiver, bilinear form, reductions and names of root systems.

Called by ``existence/`` (which judges reductions), ``operations/`` (which phrases them) and ``findings/``.
It knows problems as values; it refuses to know documents, verdicts and drawings.

    quiver.py      the quiver, its dimension vector and parameters, as frozen values
    build.py       the quiver of unramified local data
    form.py        bilinear form, p, connectivity, bridges, the lattice of several core poles
    reduction.py   (α, λ) brought to the fundamental set by reflections
    positive.py    Kac's root test for any non-negative vector
    dynkin.py      names of the type of a diagram
"""
