"""Facts as RDF: reading Turtle, building frozen values from it, checking and exporting it."""
