"""The whole result of a problem, assembled once, for every door.

Called by the command line, the HTTP interface and the page.  It asks the rooms below and adds nothing of its own but
names of published families; it refuses to know drawings, desks and requests.

    findings.py    the result as frozen values; ``examine``
    families.py    published names that apply to a problem
    output.py      the result as JSON data
    types.py       the shape of that JSON, from which its schema is written
    text.py        the result as plain text for a terminal
    recheck.py     certificates read back from JSON and checked against their problem
    schema.py      JSON Schema of the documents and results
"""
