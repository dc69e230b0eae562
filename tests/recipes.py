"""Recipes of published tables as mixtures: what each salt brings, written out by hand."""

from collections.abc import Mapping
from functools import lru_cache

from bufferfolio import resources
from bufferfolio.definitions import Ion, Library
from bufferfolio.published import PublishedTable
from bufferfolio.reading import read_evidence, read_library
from bufferfolio.speciation import Mixture
from solutions import CALCIUM, CHLORIDE, POTASSIUM, SODIUM, mixture_of

# Families and strong ions of one mole; the balance of charge finds the protons.
BRINGS: Mapping[str, tuple[Mapping[str, int], Mapping[Ion, int]]] = {
    "K tetraoxalate": ({"oxalate": 2}, {POTASSIUM: 1}),
    "KH phthalate": ({"phthalate": 1}, {POTASSIUM: 1}),
    "KH tartrate": ({"tartrate": 1}, {POTASSIUM: 1}),
    "KH2 citrate": ({"citrate": 1}, {POTASSIUM: 1}),
    "KH2PO4": ({"phosphate": 1}, {POTASSIUM: 1}),
    "Na2HPO4": ({"phosphate": 1}, {SODIUM: 2}),
    "NaHCO3": ({"carbonate": 1}, {SODIUM: 1}),
    "Na2CO3": ({"carbonate": 1}, {SODIUM: 2}),
    "Na2B4O7": ({"borate": 4}, {SODIUM: 2}),
    "H3BO3": ({"borate": 1}, {}),
    "tris": ({"tris": 1}, {}),
    "tris hydrochloride": ({"tris": 1}, {CHLORIDE: 1}),
    "acetic acid": ({"acetate": 1}, {}),
    "Na acetate": ({"acetate": 1}, {SODIUM: 1}),
    "Ca(OH)2": ({}, {CALCIUM: 1}),
    "NaOH": ({}, {SODIUM: 1}),
    "HCl": ({}, {CHLORIDE: 1}),
    "KCl": ({}, {POTASSIUM: 1, CHLORIDE: 1}),
}


@lru_cache(maxsize=1)
def shipped() -> Library:
    """Return the shipped definitions, read once."""
    return read_library(resources.systems())


@lru_cache(maxsize=1)
def shipped_tables() -> tuple[PublishedTable, ...]:
    """Return the published tables of the library, read once."""
    return read_evidence(resources.systems(), shipped())


def recipe(text: str, factor: float = 1.0) -> Mixture:
    """Return the mixture of "KH2PO4=0.025; Na2HPO4=0.025" in mol/kg, all times a factor."""
    families: dict[str, float] = {}
    ions: dict[Ion, float] = {}
    for part in text.split("; "):
        salt, amount = part.split("=")
        brought, strong = BRINGS[salt]
        for key, count in brought.items():
            family = shipped().families[key]
            families[family.key] = families.get(family.key, 0.0) + count * float(amount) * factor
        for ion, count in strong.items():
            ions[ion] = ions.get(ion, 0.0) + count * float(amount) * factor
    known = shipped().families
    return mixture_of([(known[key], total) for key, total in families.items()], list(ions.items()))
