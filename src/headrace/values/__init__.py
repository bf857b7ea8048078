"""Frozen types that pass between the layers. This package imports nothing of Headrace."""
