"""What outlets take: one file per family, all on the exact route vectors of the core (see `base`)."""
