"""Operations on problems, in the words of connections.

Called by ``findings/`` and ``web/``.  It phrases the reductions of ``roots/`` as twists, reorderings and middle
convolutions, and carries out operations on local data, each a pure function that returns a ``Result`` or raises
``Refused`` with the condition that fails; it refuses to know verdicts, documents and drawings.

    result.py       what an operation returns, and how it refuses
    twist.py        twists by connections of rank one
    reordering.py   the order of eigenvalues; reflections at leg vertices
    moebius.py      change of the variable
    poles.py        the base pole, and regular points listed as poles
    classes.py      classes as slots along a leg, and back
    reflection.py   reflections at core vertices: twist, middle convolution, twist back
    readings.py     several connections that share one quiver
    offers.py       the operations offered at a vertex, with their conditions
    descent.py      the core moves of a reduction as steps of a descent
    playing.py      each step of a descent as a problem of its own
"""
