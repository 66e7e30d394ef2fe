"""Operations on problems, in the words of connections.

Called by ``findings/``.  It phrases the reductions of ``roots/`` as twists, reorderings and middle convolutions; it
refuses to know verdicts, documents and drawings.

    descent.py     the core moves of a reduction as steps of a descent
"""
