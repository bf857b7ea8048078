"""Facts and saved answers over HTTP: a SPARQL endpoint, pages for every address, answers to scenarios.

    http        requests and responses as values, errors with a status
    negotiate   which media type an Accept header asks for
    site        what the service works with: engines, results folder, limits
    protocol    SPARQL 1.1 Protocol at /sparql
    describe    service description and VoID
    entity      what is known of an address, as statements and as values for a page
    ask         scenarios in, answers out, saved when asked; asking: the worker's side
    openapi     the description of all that, for machines
    pages/      HTML: markup, frame, start, search, entity, run, editor
    static/     style sheet and script
    app         routes, and the WSGI application
    serve       the server

The server is waitress: it buffers requests and responses, so that slow clients hold no thread, checks what it is sent,
needs nothing else, and calls a plain function per request, which suits workers that are waited for. (Measured with
small answers: as fast as an asynchronous stack; the standard library's server warns against its use for this.)
"""
