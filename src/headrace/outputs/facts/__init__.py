"""Facts as pages: what a name means (`find`), one entity (`entity`, `host`), and lists of a kind (`listing`)."""
