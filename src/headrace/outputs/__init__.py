"""What a user sees: the command line, JSON, files of a review; later the SPARQL service. Tables are made by `headrace.pages`."""
