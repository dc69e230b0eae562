"""What may have gone wrong with a batch or with its reading, and what each would make of it.

A suspect has an extent: a factor, a share, a temperature. Where it is not fixed it lies in a range,
and nearer to the harmless end is as likely as farther from it, counted as `extent_at` spaces it.
"""

import math
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, replace
from typing import Final

import numpy as np

from bufferfolio.air import CARBONATE, carbonate_in_air, with_carbonate
from bufferfolio.composition import mixed, scaled
from bufferfolio.measurements import ISOPOTENTIAL, measured, shown, target_at, with_excess
from bufferfolio.recipes import Part, listing, measure_of, mixture_of
from bufferfolio.reserves import to_limit
from bufferfolio.speciation import Mixture
from bufferfolio.subjects import Subject, reference_temperature
from bufferfolio.substitutes import Setting


@dataclass(frozen=True, slots=True, kw_only=True)
class Suspect:
    """One thing that may have gone wrong."""

    kind: str  # key of `KINDS`
    name: str  # of the reagent or titrant it concerns; "" for none
    other: str  # of the reagent that took its place; "" for none
    position: int  # of the part or titrant; −1 for none
    choice: int  # position of the substitute or of the other part; −1 for none
    low: float  # range of its extent; both ends the same where it is fixed
    high: float

    @property
    def fixed(self) -> bool:
        """Whether its extent is one number."""
        return self.low == self.high


def suspects_of(setting: Setting, temperature: float) -> tuple[Suspect, ...]:
    """Return everything that may have gone wrong with a formulation at one temperature (K)."""
    return (
        _suspect("nothing", 0.0),
        *_of_parts(setting),
        *(_suspect(kind, factor) for kind, factor in VOLUME_FACTORS.items()),
        _suspect("evaporation", 1.0, 0.5),
        *_of_gases(setting),
        *_of_titrants(setting, temperature),
        _suspect("adjusted", *_ends(setting.subject)),
        _suspect("slope", 0.8, 1.05),
        _suspect("offset", -0.5, 0.5),
        _suspect("compensation off", 298.15),
        _suspect("compensation", 273.15, 323.15),
    )


def _suspect(
    kind: str,
    low: float,
    high: float | None = None,
    name: str = "",
    other: str = "",
    position: int = -1,
    choice: int = -1,
) -> Suspect:
    return Suspect(
        kind=kind,
        name=name,
        other=other,
        position=position,
        choice=choice,
        low=low,
        high=low if high is None else high,
    )


def _of_parts(setting: Setting) -> Iterator[Suspect]:
    parts = setting.subject.recipe.parts
    for at, part in enumerate(parts):
        for kind, factor in PART_FACTORS.items():
            yield _suspect(kind, factor, name=part.label, position=at)
        for choice, other in enumerate(setting.substitutes[at]):
            kind = "other form" if _ions(other) == _ions(part) else "conjugate"
            yield _suspect(kind, 1.0, None, part.label, other.label, at, choice)
        for later in range(at + 1, len(parts)):
            if (part.added.volume is None) == (parts[later].added.volume is None):
                yield _suspect("interchanged", 1.0, None, part.label, parts[later].label, at, later)


def _ions(part: Part) -> Mapping[str, float]:
    pairs = zip(part.added.ions, part.added.per_ion, strict=True)
    return {ion.name: share for ion, share in pairs}


def _of_gases(setting: Setting) -> Iterator[Suspect]:
    held = {family.key for family in setting.subject.mixture.families}
    if setting.carbonate is not None or CARBONATE in held:
        yield _suspect("carbon dioxide", 0.0, 1.0)
    if AMMONIA in {
        family.key for part in setting.subject.recipe.parts for family in part.added.families
    }:
        yield _suspect("ammonia", 0.0, 0.9)


def _of_titrants(setting: Setting, temperature: float) -> Iterator[Suspect]:
    subject, seen = setting.subject, set()
    for at, titrant in enumerate(subject.formulation.titrants):
        if titrant.direction in seen:
            continue
        seen.add(titrant.direction)
        reserve = to_limit(subject, temperature, at, subject.mixture)
        most = 2.0 * reserve if reserve > 0.0 else OVERSHOOT
        water = subject.additions[at].water
        most = min(most, 1.0 / water) if water > 0.0 else most
        yield _suspect("overshoot", 0.0, most, name=titrant.label, position=at)


def _ends(subject: Subject) -> tuple[float, float]:
    use = subject.formulation.use_temperature
    return use.low, use.high


def extent_at(suspect: Suspect, share: float) -> float:
    """Return an extent of a suspect, `share` of the way through its range; small ones are denser.

    Shapes: scalar.
    Units: those of the extent, see `KINDS`.
    Raises: nothing.
    Source: own choice: twice as far is half as likely where the range begins at no harm.
    """
    through = share if suspect.kind in EVEN else share * share
    return suspect.low + (suspect.high - suspect.low) * through


@dataclass(frozen=True, slots=True, kw_only=True)
class Scene:
    """A formulation at the temperature of a reading, ready to be altered."""

    setting: Setting
    temperature: float  # K
    base: Mixture  # the formulation, listing all that any suspect could bring
    in_air: float  # mol/kg of carbonate in equilibrium with air; NaN where none can be reckoned
    aim: float  # pH that the formulation is adjusted to, at its reference temperature


def scene_of(setting: Setting, temperature: float) -> Scene:
    """Return a formulation at one temperature (K), ready to be altered."""
    subject = setting.subject
    base = _base(setting)
    held = {family.key for family in base.families}
    return Scene(
        setting=setting,
        temperature=temperature,
        base=base,
        in_air=carbonate_in_air(subject, base, temperature) if CARBONATE in held else math.nan,
        aim=target_at(subject, reference_temperature(subject.formulation)),
    )


def _base(setting: Setting) -> Mixture:
    like = setting.subject.mixture
    if setting.carbonate is not None:
        like = replace(
            like,
            families=(*like.families, setting.carbonate),
            totals=np.append(like.totals, 0.0),
        )
    others = [part.added for parts in setting.substitutes for part in parts]
    return with_excess(listing(like, *others), 0.0)


def altered(scene: Scene, suspect: Suspect, extent: float) -> Mixture:
    """Return what a batch holds where a suspect is true; as it should where only the reading errs.

    Shapes: mixtures of one.
    Units: extent as the kind has it.
    Raises: nothing.
    Source: conservation of mass; the kinds are the project's own.
    """
    base, kind, subject = scene.base, suspect.kind, scene.setting.subject
    if suspect.kind in PART_KINDS:
        return _other_parts(scene, suspect, extent)
    if kind in VOLUME_FACTORS or kind == "evaporation":
        return scaled(base, np.array(1.0 / extent))
    if kind == "carbon dioxide":
        own = float(base.totals[_row(base, CARBONATE)])
        return with_carbonate(base, own + extent * (scene.in_air - own))
    if kind == "ammonia":
        totals = base.totals.copy()
        totals[_row(base, AMMONIA)] *= 1.0 - extent
        return replace(base, totals=totals)
    if kind == "overshoot":
        return mixed(base, subject.additions[suspect.position], np.array(extent))
    if kind == "adjusted":
        molalities = base.molalities.copy()
        excess = measured(subject, extent, scene.aim).excess
        # The two nameless ions stand last.
        molalities[-2:] = max(excess, 0.0), max(-excess, 0.0)
        return replace(base, molalities=molalities)
    return base


def _row(mixture: Mixture, key: str) -> int:
    return [family.key for family in mixture.families].index(key)


def _other_parts(scene: Scene, suspect: Suspect, factor: float) -> Mixture:
    """Return the mixture of a recipe in which one part, or two, are not what they should be."""
    recipe = scene.setting.subject.recipe
    parts, at = list(recipe.parts), suspect.position
    if suspect.kind == "interchanged":
        one, other = parts[at], parts[suspect.choice]
        parts[at] = replace(one, amount=other.amount * measure_of(other) / measure_of(one))
        parts[suspect.choice] = replace(
            other, amount=one.amount * measure_of(one) / measure_of(other)
        )
    elif suspect.choice >= 0:
        parts[at] = scene.setting.substitutes[at][suspect.choice]
    else:
        parts[at] = replace(parts[at], amount=factor * parts[at].amount)
    return mixture_of(replace(recipe, parts=tuple(parts)), scene.base)


def read_as(suspect: Suspect, extent: float, pH: float, temperature: float) -> float:
    """Return what is read where a suspect is true, and the pH of the batch is `pH`.

    Shapes: scalar.
    Units: temperature K; extent as the kind has it.
    Raises: nothing.
    Source: the electrode's signal is straight in pH and zero at pH 7; `measurements.shown`.
    """
    if suspect.kind == "slope":
        return ISOPOTENTIAL + extent * (pH - ISOPOTENTIAL)
    if suspect.kind == "offset":
        return pH + extent
    if suspect.kind in {"compensation", "compensation off"}:
        return shown(pH, temperature, extent)
    return pH


def words_of(suspect: Suspect) -> str:
    """Return a suspect in words, its extent left out."""
    return KINDS[suspect.kind].replace("{name}", suspect.name).replace("{other}", suspect.other)


AMMONIA: Final = "ammonia"  # key of the family that an open bottle loses
OVERSHOOT: Final = 0.05  # mol/kg, where no reserve says how much would be much
VOLUME_FACTORS: Final[Mapping[str, float]] = {
    "half the water": 0.5,
    "too little water": 0.9,
    "too much water": 1.1,
    "twice the water": 2.0,
}
PART_FACTORS: Final[Mapping[str, float]] = {
    "left out": 0.0,
    "too little": 0.9,
    "too much": 1.1,
    "doubled": 2.0,
}
PART_KINDS: Final = frozenset({*PART_FACTORS, "other form", "conjugate", "interchanged"})
EVEN: Final = frozenset({"adjusted", "slope", "offset", "compensation"})

# What a page says of each kind; what its extent is stands behind it.
KINDS: Final[Mapping[str, str]] = {
    "nothing": "nothing is wrong",
    "left out": "{name} was left out",  # factor of its amount, in these four
    "too little": "10 % too little of {name}",
    "too much": "10 % too much of {name}",
    "doubled": "twice as much of {name}",
    "other form": "{other} was taken for {name}",
    "conjugate": "{other} was taken for {name}",
    "interchanged": "the amounts of {name} and {other} were interchanged",
    "half the water": "half the volume of water",  # volume over the right volume, in these four
    "too little water": "10 % too little water",
    "too much water": "10 % too much water",
    "twice the water": "twice the volume of water",
    "evaporation": "water evaporated",  # water left over water at first
    "carbon dioxide": "carbon dioxide was exchanged with air",  # share of the way to equilibrium
    "ammonia": "ammonia was lost to air",  # share of all ammonia
    "overshoot": "too much of {name} was added in adjusting it",  # mol per kg of water
    "adjusted": "it was adjusted to the same pH at another temperature",  # K
    "slope": "the electrode's slope is off",  # over the right slope
    "offset": "the meter is off by the same amount everywhere",  # pH
    "compensation off": "the meter does not compensate, and stands at 25 °C",  # K
    "compensation": "the meter compensates for another temperature",  # K
}
