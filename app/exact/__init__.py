"""Exact numbers: polynomials in free symbols over the field of square roots of rationals.

Subject: the text grammar of numbers, exact values and their arithmetic, proved zero tests, Q-linear relations,
small exact linear algebra, writing as text and as LaTeX, and plain floating approximation.

Called by every room above.  Refuses to know: poles, problems, documents, JSON pointers, pages.

    limits         the bounds on a number, and the refusal for going over one
    value          Value: the sparse exact value and its ring operations
    square_root    principal square roots of rationals (the only place where integers are factored)
    bounded        products and powers with the work estimated before it is done
    names          symbol names: what is one, which occur in a text
    tokens         text → tokens, with the character where each begins
    parser         tokens → Value, or a polynomial in 1/z
    writing        Value → canonical text that reads back to the same value
    number         the door to names, parser and writing
    latex          Value → LaTeX
    approximate    Value → floating complex number, without an error bound
    independence   how many square roots are independent
    relations      Q-linear relations between values
    linear         rank, nullspace and determinant over the rationals

Importing any of these loads neither flint nor any other library of algebra; the functions that need flint import
it when they are called.
"""
