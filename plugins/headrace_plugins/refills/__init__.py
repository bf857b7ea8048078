"""Methods that answer what must be put back."""
