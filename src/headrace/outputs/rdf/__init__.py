"""Results as RDF: one named graph per run, one TriG file per graph, and folders that hold them.

    terms      IRIs of results and of the standards they use, without logic
    shape      which class and properties each part of an answer's JSON has
    build      an answer's JSON document as statements
    case       what was asked: the scenario and the case it became, with the facts it rests on
    provenance who made the run, when, from which facts, with which software
    folder     saving a run so that a reader never sees half of one; listing and reading runs
    save       from a result to a saved run
    facts      the facts and what is derived from them, as statements

The JSON of an answer and its graph hold the same values: every field of the JSON has one property.
"""
