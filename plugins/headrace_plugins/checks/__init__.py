"""What a case is warned of."""
