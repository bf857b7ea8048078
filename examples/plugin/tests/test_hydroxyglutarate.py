"""All that a plugin's author needs to write to have the contract checked, and one figure that is known by hand."""

from fractions import Fraction

from hydroxyglutarate import Hydroxyglutarate

import headrace
from headrace.testing import conformance


def test_it_conforms() -> None:
    conformance(Hydroxyglutarate)


def test_it_takes_one_oxoglutarate_and_one_nadh() -> None:
    draw = next(draw for draw in headrace.drains(Hydroxyglutarate.example).draws if "hydroxyglutarate" in draw.outlet)
    assert [(term.compound, term.taken, term.returned) for term in draw.pools] == [("oxoglutarate", 1, 0)]
    assert draw.skeletons == 1
    assert draw.needs["nadh"] == Fraction(1)
