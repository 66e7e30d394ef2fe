"""The web: a local application for the browser, and the HTTP interface.

    serve             port, server, browser: what ``python -m app`` runs
    application       the application put together
    guard             first thing every request meets: Host, Origin, sizes; last thing of every response: headers
    protocol          the one error shape for requests that are not even HTTP
    refusals          every refusal and every fault as a response of one shape
    work              computing off the event loop, with a limit

    api               JSON under /api; jobs_api: long computations; operate_api: operations, walls, closures

    forms             posted form → draft → store
    demos             the demo problems
    pages             the desk, its edits, documents, certificates, help
    contexts          what the desk's templates get; diagram_contexts and certificate_words: parts of it
    operating         pages of operations at a vertex and of the descent; whole_operations: on the whole problem
    walls             the page of walls and closures
    connections       pages of explicit connections
    mathematics       formulas as MathML; fonts: the font for them
    rendering         the templates' environment; views: choices that the browser keeps

Called by ``__main__``.  It refuses to know mathematics: it asks ``findings/``, ``drawing/`` and ``desk/``.
"""
