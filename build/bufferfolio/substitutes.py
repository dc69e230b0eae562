"""What stands beside a formulation's reagents on the shelf, and may be taken in their place."""

from collections.abc import Iterator
from dataclasses import dataclass, replace

from bufferfolio.air import CARBONATE
from bufferfolio.definitions import Family, Library, Reagent
from bufferfolio.recipes import Part, measure_of, part_of
from bufferfolio.subjects import Subject


@dataclass(frozen=True, slots=True, kw_only=True)
class Setting:
    """A formulation, and what is needed to suspect anything of it."""

    subject: Subject
    carbonate: Family | None  # where the formulation holds none itself; None also without a library
    substitutes: tuple[tuple[Part, ...], ...]  # a part each: what may be taken in its place


def setting_of(subject: Subject, library: Library) -> Setting:
    """Return a formulation with the reagents that may be mistaken for its own."""
    held = {family.key for family in subject.mixture.families}
    carbonate = None if CARBONATE in held else library.families.get(CARBONATE)
    return Setting(
        subject=subject,
        carbonate=carbonate,
        substitutes=tuple(
            tuple(_substitutes(part, library, subject)) for part in subject.recipe.parts
        ),
    )


def _substitutes(part: Part, library: Library, subject: Subject) -> Iterator[Part]:
    """Yield what stands beside a reagent on the shelf: its other forms and its conjugates."""
    own = library.reagents[part.key]
    used = {each.key for each in subject.recipe.parts}
    own_ions = {ion.name for ion in subject.mixture.ions}
    seen = {sum(ion.charge * share for ion, share in own.ions.items())}
    others = [
        reagent
        for reagent in library.reagents.values()
        if reagent.key not in used and (reagent.stock is None) == (own.stock is None)
    ]
    # Of salts that differ only in an inert ion, the one with an ion of the formulation comes first.
    others.sort(key=lambda each: (sum(ion.name not in own_ions for ion in each.ions), each.key))
    for other in others:
        if _brings(other) == _brings(own):
            yield _in_place_of(part, other, library)
    for other in others:
        charge = sum(ion.charge * share for ion, share in other.ions.items())
        conjugate = len(own.families) == 1 and dict(other.families) == dict(own.families)
        if own.stock is None and conjugate and charge not in seen:
            seen.add(charge)
            yield _in_place_of(part, other, library)


def _brings(reagent: Reagent) -> tuple[object, object]:
    return dict(reagent.families), dict(reagent.ions)


def _in_place_of(part: Part, reagent: Reagent, library: Library) -> Part:
    """Return the same mass of another solid, or the same volume of another liquid."""
    weighed = part.added.volume is None
    other = part_of(reagent, 1.0, library.families, weighed=weighed)
    return replace(other, amount=part.amount * measure_of(part) / measure_of(other))
