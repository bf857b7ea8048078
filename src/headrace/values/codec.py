"""Encoding of exact fractions for msgspec: "3/2" in files, `Fraction` in memory."""

from __future__ import annotations

from fractions import Fraction
from typing import Any


def encode_hook(value: Any) -> Any:
    """Turn a Fraction into its exact text; anything else is not ours to encode."""
    if isinstance(value, Fraction):
        return str(value)
    raise NotImplementedError(f"cannot encode {type(value).__name__}")


def decode_hook(kind: type, value: Any) -> Any:
    """Turn exact text back into a Fraction."""
    if kind is Fraction:
        return Fraction(value)
    raise NotImplementedError(f"cannot decode {kind.__name__}")
