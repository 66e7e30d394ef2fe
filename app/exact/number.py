"""The door to numbers as text: reading, writing, names of symbols.

``parse_number`` and ``write_number`` are inverse to each other: writing what was read gives the canonical form, and
reading that gives the same value again.
"""

from app.exact.names import check_symbol, names_in
from app.exact.parser import parse_laurent, parse_number
from app.exact.writing import write_laurent, write_number

__all__ = ["check_symbol", "names_in", "parse_laurent", "parse_number", "write_laurent", "write_number"]
