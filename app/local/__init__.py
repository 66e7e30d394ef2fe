"""Local data of linear differential systems: formal types, problems, their JSON document, the shorthand.

Called by ``roots/`` and every room above it.  It knows nothing of quivers, existence, pages or files: text and
parsed JSON come in, a valid ``Problem`` (or a refusal that lists every fault with its place) goes out.

    partition        integer partitions
    formal_type      eigenvalues, exponents, blocks, positions, poles: frozen values
    conjugates       Galois conjugates of exponents, compared exactly
    problem          the whole problem; always valid
    newton           slopes and Newton polygon of a pole
    orbit            irregularity, orbit dimensions, rigidity index, expected dimension
    limits           how large a document may be
    faults           the list of faults with their JSON pointers
    json_reader      strict JSON text → data
    numbers          the numbers of one document, read under its limits
    blocks           one block of a pole: exponent and class
    poles            all poles, and what concerns several of them
    document         a whole document → ``Problem``
    document_types   the document's shape, as typed dictionaries
    writer           ``Problem`` → document, in canonical form
    shorthand_grammar  text of the shorthand → trees of multiplicities
    shorthand        ``21,111,111`` → ``Problem`` and back
"""
