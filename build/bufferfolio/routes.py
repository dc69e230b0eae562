"""Other ways to the same solution, from what the library has on its shelf.

A route brings the same totals of every family and the same charge of strong ions; so it has the
same pH but for inert ions, which it may bring more or less of, and which it names.
"""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from itertools import combinations, product
from typing import Final

import numpy as np

from bufferfolio.recipes import Part, Recipe, mixture_of, recipe_water
from bufferfolio.shelves import Group, Shelf
from bufferfolio.subjects import Subject, solved_at

Amounts = list[tuple[Group, float]]  # mol of each


@dataclass(frozen=True, slots=True, kw_only=True)
class Route:
    """One way to make a formulation."""

    kind: str  # key of `KINDS`
    recipe: Recipe  # for the recipe's own batch
    instead: tuple[
        tuple[Part, ...], ...
    ]  # a part each: other forms that would do, in their amounts
    differences: tuple[tuple[str, float], ...]  # inert ions and mol/kg more (less) than the recipe
    pH: float  # computed, at the temperature asked for


def routes_of(subject: Subject, shelf: Shelf, temperature: float) -> tuple[Route, ...]:
    """Return the recipe as it is written, and other ways, the closest first.

    Shapes: scalar.
    Units: temperature K.
    Raises: nothing.
    Source: conservation of mass and of charge, solved exactly; no amount is negative.
    """
    kept = [part for part in subject.recipe.parts if _inert(part)]
    active = [part for part in subject.recipe.parts if not _inert(part)]
    written = _route(subject, shelf, "written", subject.recipe, temperature)
    if not active or not all(key in shelf.families for key in _totals(active)):
        return (written,)
    own = frozenset(_brings(part) for part in active)
    found = []
    for kind, amounts in _ways(shelf, _totals(active), _charge(active)):
        used = frozenset(_brings(group.part) for group, _ in amounts)
        recipe = _recipe(subject, amounts, kept)
        if used != own and recipe is not None and not _dangerous(recipe, subject.recipe):
            route = _route(subject, shelf, kind, recipe, temperature)
            if _same_hardness(subject, route):
                found.append(route)
    foreign = {ion.name for ion in subject.mixture.ions}
    found.sort(
        key=lambda route: (
            sum(name not in foreign for name, _ in route.differences),
            len(route.recipe.parts),
            sum(abs(more) for _, more in route.differences),
        )
    )
    return (written, *found[: MOST_ROUTES - 1])


def _ways(
    shelf: Shelf, totals: Mapping[str, float], charge: float
) -> Iterator[tuple[str, Amounts]]:
    """Yield every combination of reagents that meets the totals and the charge."""
    tiny = NOTHING * (sum(totals.values()) + abs(charge))
    keys = list(totals)
    choices = [shelf.families[key] for key in keys]
    for one_each in product(*choices):
        amounts = [
            (group, totals[key] / group.share) for key, group in zip(keys, one_each, strict=True)
        ]
        missing = charge - sum(group.charge * moles for group, moles in amounts)
        if abs(missing) <= tiny:
            yield "alone", amounts
            continue
        for strong in shelf.bases if missing > 0.0 else shelf.acids:
            kind = "base" if missing > 0.0 else "acid"
            yield kind, [*amounts, (strong, missing / strong.charge)]
    for at, key in enumerate(keys):
        others = [groups for position, groups in enumerate(choices) if position != at]
        other_keys = [other for other in keys if other != key]
        for first, second in combinations(choices[at], 2):
            for rest in product(*others):
                amounts = [
                    (group, totals[other] / group.share)
                    for other, group in zip(other_keys, rest, strict=True)
                ]
                missing = charge - sum(group.charge * moles for group, moles in amounts)
                pair = _pair(first, second, totals[key], missing)
                if pair is not None and min(pair) > tiny:
                    yield "pair", [(first, pair[0]), (second, pair[1]), *amounts]


def _pair(first: Group, second: Group, total: float, charge: float) -> tuple[float, float] | None:
    """Solve for the amounts of two forms of one family that have a total and a charge together."""
    determinant = first.share * second.charge - second.share * first.charge
    if abs(determinant) < NOTHING:
        return None
    one = (total * second.charge - second.share * charge) / determinant
    other = (first.share * charge - total * first.charge) / determinant
    return one, other


def _recipe(subject: Subject, amounts: Amounts, kept: Sequence[Part]) -> Recipe | None:
    """Return the recipe that makes the same molalities; None where no room is left for water."""
    parts = [replace(group.part, amount=moles) for group, moles in amounts]
    parts += kept
    brought = sum(part.amount * part.added.water for part in parts)
    water = recipe_water(subject.recipe)
    if brought > MOST_BROUGHT * water:
        return None
    measured = water - brought if subject.recipe.counted else subject.recipe.water
    return replace(subject.recipe, parts=tuple(parts), water=measured)


def _instead(part: Part, shelf: Shelf) -> tuple[Part, ...]:
    """Return the other forms of a part that are on the shelf, the same amount of each."""
    for group in shelf.groups:
        alike = (group.part, *group.others)
        if part.key in {each.key for each in alike}:
            return tuple(
                replace(each, amount=part.amount) for each in alike if each.key != part.key
            )
    return ()


def _route(subject: Subject, shelf: Shelf, kind: str, recipe: Recipe, temperature: float) -> Route:
    mixture = mixture_of(recipe, subject.mixture)
    before = np.zeros(len(mixture.ions))
    before[: len(subject.mixture.ions)] = subject.mixture.molalities
    more = mixture.molalities - before
    tiny = NOTHING * (float(np.abs(before).sum()) + float(mixture.totals.sum()))
    return Route(
        kind=kind,
        recipe=recipe,
        instead=tuple(_instead(part, shelf) for part in recipe.parts),
        differences=tuple(
            (ion.name, float(change))
            for ion, change in zip(mixture.ions, more, strict=True)
            if abs(change) > tiny
        ),
        pH=float(solved_at(subject, temperature, mixture).pH),
    )


def _same_hardness(subject: Subject, route: Route) -> bool:
    """Ions of more than one charge are there for a reason: a route must not change them."""
    changed = {name for name, _ in route.differences}
    listed = mixture_of(route.recipe, subject.mixture).ions
    return not any(abs(ion.charge) > 1 and ion.name in changed for ion in listed)


def _dangerous(recipe: Recipe, written: Recipe) -> bool:
    """Say whether two parts of a route set a gas free that the recipe itself does not."""
    return bool(_meetings(recipe) - _meetings(written))


def _meetings(recipe: Recipe) -> set[tuple[str, str, str]]:
    found = set()
    for part in recipe.parts:
        for danger in part.releases:
            partner = danger.rsplit(" with ", 1)[1]
            for other in recipe.parts:
                met = partner == other.nature or any(
                    family.key == partner for family in other.added.families
                )
                if other.key != part.key and met:
                    found.add((danger, part.key, other.key))
    return found


def _inert(part: Part) -> bool:
    return not part.added.families and _charge([part]) == 0.0


def _totals(parts: Sequence[Part]) -> dict[str, float]:
    totals: dict[str, float] = {}
    for part in parts:
        for family, share in zip(part.added.families, part.added.per_family, strict=True):
            totals[family.key] = totals.get(family.key, 0.0) + part.amount * share
    return totals


def _charge(parts: Sequence[Part]) -> float:
    return sum(
        part.amount * ion.charge * share
        for part in parts
        for ion, share in zip(part.added.ions, part.added.per_ion, strict=True)
    )


def _brings(part: Part) -> tuple[object, ...]:
    added = part.added
    families = sorted(zip((each.key for each in added.families), added.per_family, strict=True))
    ions = sorted(zip((ion.name for ion in added.ions), added.per_ion, strict=True))
    return (*families, *ions)


NOTHING: Final = 1e-9  # relative, below which an amount is none
MOST_ROUTES: Final = 7
MOST_BROUGHT: Final = 0.8  # of all the water: some has to be left to dissolve things in

KINDS: Final[Mapping[str, str]] = {
    "written": "as the recipe says",
    "pair": "from two forms of one acid",
    "base": "with strong base",
    "acid": "with strong acid",
    "alone": "without strong acid or base",
}
