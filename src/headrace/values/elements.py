"""Standard atomic weights, and molar masses from formulas.

Abridged values of the IUPAC Commission on Isotopic Abundances and Atomic Weights: Prohaska T. et al. (2022)
"Standard atomic weights of the elements 2021 (IUPAC Technical Report)", Pure Appl. Chem. 94:573-600,
doi 10.1515/pac-2019-0603, table 3; g/mol.
"""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction

ATOMIC_WEIGHTS: dict[str, Fraction] = {
    element: Fraction(weight)
    for element, weight in {
        "H": "1.0080",
        "Li": "6.94",
        "B": "10.81",
        "C": "12.011",
        "N": "14.007",
        "O": "15.999",
        "F": "18.998",
        "Na": "22.990",
        "Mg": "24.305",
        "Al": "26.982",
        "Si": "28.085",
        "P": "30.974",
        "S": "32.06",
        "Cl": "35.45",
        "K": "39.098",
        "Ca": "40.078",
        "V": "50.942",
        "Cr": "51.996",
        "Mn": "54.938",
        "Fe": "55.845",
        "Co": "58.933",
        "Ni": "58.693",
        "Cu": "63.546",
        "Zn": "65.38",
        "As": "74.922",
        "Se": "78.971",
        "Br": "79.904",
        "Mo": "95.95",
        "Ag": "107.87",
        "I": "126.90",
        "Ba": "137.33",
        "W": "183.84",
    }.items()
}


def molar_mass(formula: Mapping[str, int]) -> Fraction:
    """M = sum of count times atomic weight, g/mol, exact on the table's values.

    The electrons that a charge adds or removes (0.00055 g/mol each) are left out.
    Raises KeyError for an element without a weight here, such as "R".

    >>> float(molar_mass({"C": 6, "H": 12, "O": 6}))
    180.156
    """
    return sum((ATOMIC_WEIGHTS[element] * count for element, count in formula.items()), Fraction(0))


def neutral_mass(formula: Mapping[str, int], charge: int) -> Fraction:
    """Molar mass of the same compound with as many protons added or taken as make it neutral, g/mol.

    >>> float(neutral_mass({"C": 4, "H": 4, "O": 4}, -2))  # succinate, weighed as succinic acid
    118.088
    """
    return molar_mass(formula) - charge * ATOMIC_WEIGHTS["H"]
