"""The decision whether an irreducible system exists, additive and multiplicative, with checkable certificates.

Called by ``findings/``.  It judges the reductions of ``roots/``; it refuses to know documents, sentences for pages,
and drawings.

    verdict.py        verdicts and certificates, as frozen values
    decide.py         the decision for a quiver with parameters
    fundamental.py    what can still forbid existence in the fundamental set
    enumeration.py    all decompositions of a small vector
    ramified.py       the decision for ramified data
    ramified_certificates.py  their certificates, as frozen values
    residue_sum.py    principal parts whose residues have a sum with small eigenspaces
    problems.py       additive and multiplicative verdicts of a problem
    check.py          certificates checked by code that shares nothing with the decision
    check_ramified.py the same for ramified data
"""
