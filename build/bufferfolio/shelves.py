"""What the library has on its shelf that could make a formulation."""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass

from bufferfolio.definitions import Library, Reagent
from bufferfolio.recipes import Part, part_of
from bufferfolio.subjects import Subject


@dataclass(frozen=True, slots=True, kw_only=True)
class Group:
    """Reagents that bring the same: hydrates of one salt, strengths of one acid."""

    part: Part  # one mole of the one that is chosen
    others: tuple[Part, ...]  # one mole of each that would do
    share: float  # mol of its family per mol; 0 for strong acids and bases
    charge: float  # of the strong ions of one mole


@dataclass(frozen=True, slots=True, kw_only=True)
class Shelf:
    """What could make a formulation."""

    families: Mapping[str, tuple[Group, ...]]  # for each family of the recipe, what brings it alone
    acids: tuple[Group, ...]  # strong ones, whose ion the formulation holds
    bases: tuple[Group, ...]

    @property
    def groups(self) -> tuple[Group, ...]:
        """All of them."""
        brought = (group for groups in self.families.values() for group in groups)
        return (*self.acids, *self.bases, *brought)


def shelf_of(subject: Subject, library: Library) -> Shelf:
    """Return what could make a formulation; its own reagents come first in each group."""
    keys = {family.key: None for part in subject.recipe.parts for family in part.added.families}
    strong = _groups(
        (
            reagent
            for reagent in library.reagents.values()
            if not reagent.families and {ion.name for ion in reagent.ions} <= _held(subject)
        ),
        subject,
        library,
    )
    return Shelf(
        families={
            key: _groups(
                (each for each in library.reagents.values() if set(each.families) == {key}),
                subject,
                library,
            )
            for key in keys
        },
        acids=tuple(group for group in strong if group.charge < 0.0),
        bases=tuple(group for group in strong if group.charge > 0.0),
    )


def _held(subject: Subject) -> set[str]:
    return {ion.name for ion in subject.mixture.ions}


def _groups(reagents: Iterable[Reagent], subject: Subject, library: Library) -> tuple[Group, ...]:
    """Return reagents that bring the same as groups; foreign ions last."""
    found: dict[tuple[object, ...], list[Reagent]] = {}
    for reagent in reagents:
        ions = sorted((ion.name, share) for ion, share in reagent.ions.items())
        brings = (*sorted(reagent.families.items()), *ions)
        found.setdefault(brings, []).append(reagent)
    groups = [_group(alike, subject, library) for alike in found.values()]
    groups.sort(key=lambda group: (_foreign(group.part, subject), group.part.key))
    return tuple(groups)


def _group(alike: list[Reagent], subject: Subject, library: Library) -> Group:
    recipe = [part.key for part in subject.recipe.parts]
    titrants = [titrant.reagent.key for titrant in subject.formulation.titrants]

    def order(reagent: Reagent) -> tuple[bool, bool, float, str]:
        # Of strengths of one acid, the strongest brings the least water.
        share = reagent.purity if reagent.stock is None else reagent.stock.mass_fraction
        return reagent.key not in recipe, reagent.key not in titrants, -share, reagent.key

    parts = [part_of(reagent, 1.0, library.families) for reagent in sorted(alike, key=order)]
    first = min(alike, key=order)
    return Group(
        part=parts[0],
        others=tuple(parts[1:]),
        share=float(next(iter(first.families.values()), 0.0)),
        charge=float(sum(ion.charge * share for ion, share in first.ions.items())),
    )


def _foreign(part: Part, subject: Subject) -> int:
    return sum(ion.name not in _held(subject) for ion in part.added.ions)
