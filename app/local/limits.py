"""How large a problem document may be; whatever is over a limit is refused before any work is done.

The limits of a single number (length, terms, nesting, powers, digits) are those of ``exact/``.
"""

MAXIMUM_BYTES = 2_000_000
MAXIMUM_SYMBOLS = 2_000
MAXIMUM_POLES = 64
MAXIMUM_RANK = 400
MAXIMUM_POWER = 64
MAXIMUM_RAMIFICATION = 24
MAXIMUM_ROOTS = 6
MAXIMUM_NOTES = 10_000
MAXIMUM_TERMS = 100_000
"""Expanded terms in all numbers of one document together; a coefficient of z^(−k/d) counts d times (conjugates)."""
MAXIMUM_WORK = 2_000_000
"""Elementary products in all numbers of one document together, about two microseconds each."""
MAXIMUM_DIGITS = 400
"""Digits of a JSON integer, and of the common denominator of all numbers of one document."""
MAXIMUM_PLACES = 1_000
"""Faults listed in one refusal; beyond that they are only counted."""
