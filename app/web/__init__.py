"""The web: a local application for the browser, and the HTTP interface.

    serve        port, server, browser: what ``python -m app`` runs
    application  the application put together
    guard        first thing every request meets: Host, Origin, sizes; last thing every response passes: headers
    protocol     the one error shape for requests that are not even HTTP
    refusals     every refusal and every fault as a response of one shape
    api          JSON under /api
    forms        posted form → draft → store
    demos        the demo problems
    pages        the pages; contexts: what their templates get; mathematics: formulas
    rendering    the templates' environment
    work         computing off the event loop, with a limit

Called by ``__main__``.  It refuses to know mathematics: it asks ``findings/``, ``drawing/`` and ``desk/``.
"""
