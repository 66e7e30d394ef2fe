"""Explicit connections: matrices for local data, exact where possible, always verified.

Called by the command line, the page and ``analytic/``.  It takes problems and returns connections with a record of
checks; it refuses to know findings, pages and files.

    stages            the descent of local data, all poles on one footing
    realisation       minimal realisation of a principal part
    middle_convolution  mc_μ of tuples of principal parts, exact and floating
    ascent            matrices carried up along a descent
    rank_two          fundamental data of rank 2, with accessory parameters as symbols
    numerical_point   Newton on the orbits, independent of quivers
    float_matrix      floating matrices with the interface of the exact ones
    formal_reduction  the normalising gauge at a pole
    generic_values    values for free symbols, deterministic by seed
    connection        the connection: poles with coefficient matrices; operations on it
    convolved         middle convolution and twists of a connection
    document          its JSON document, read and written
    verification      the record of checks, exact and floating
    construction      a problem → a verified connection
    writing           LaTeX and Python source of a connection
    text              a construction as plain text and as JSON
"""
