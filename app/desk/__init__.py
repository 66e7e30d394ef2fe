"""The desk: the working session on which a problem is written, kept in SQLite so that nothing acknowledged is lost.

    draft      what the desk holds: raw texts of fields, parsing or not, each entry with a permanent id
    fields     the texts of a draft by address ("eigenvalue.e3.value"); changing, comparing and merging them
    edits      structural edits: add, remove, copy, move; all pure functions from draft to draft
    jordan     Jordan block sizes as a text, 2+1
    reading    draft → document → problem, with faults at their fields; problem → draft
    store      revisions, undo and redo, in one file
    folder     where that file lies on this platform

Called by ``web/``.  It refuses to know about HTTP, forms as they are posted, templates and what a problem means
beyond reading it: no verdicts, no drawings.
"""
