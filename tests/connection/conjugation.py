"""Conjugation of tuples, found by linear algebra: G·A = B·G."""

from app.exact.field import field_of
from app.exact.quotient import Quotient


def conjugator(first, second):
    """An invertible G with G·A = B·G for all coefficients A, B of two tuples of exact matrices, or None.

    For irreducible tuples G is unique up to a scalar.
    """
    pairs = [(a, b) for x, y in zip(first, second, strict=True) for a, b in zip(x, y, strict=True)]
    size = pairs[0][0].height
    rows = []
    for a, b in ((a.entries(), b.entries()) for a, b in pairs):
        for i in range(size):
            for j in range(size):
                row = [Quotient.of(0)] * (size * size)
                for k in range(size):
                    row[i * size + k] = row[i * size + k] + a[k][j]
                    row[k * size + j] = row[k * size + j] - b[i][k]
                rows.append(row)
    field = field_of(entry for row in rows for entry in row)
    kernel = field.matrix(rows).kernel()
    if kernel.width == 0:
        return None
    column = [row[0] for row in kernel.entries()]
    found = pairs[0][0].field.matrix([column[i * size : (i + 1) * size] for i in range(size)])
    return found if found.rank() == size else None
