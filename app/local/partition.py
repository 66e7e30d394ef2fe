"""Partitions of integers, as descending tuples."""


def conjugate(partition: tuple[int, ...]) -> tuple[int, ...]:
    """The conjugate partition: entry k counts the parts larger than k.

    Cost: the sum of the parts, at most.

    >>> conjugate((2, 1))
    (2, 1)
    >>> conjugate((3,))
    (1, 1, 1)
    """
    if not partition:
        return ()
    return tuple(sum(1 for part in partition if part > k) for k in range(max(partition)))
