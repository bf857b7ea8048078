"""Documents about answers."""
