"""Domain-free mathematics: arrays in, arrays out. The only importer of the LP solver and of exact algebra."""
