"""What a fit may change, where each quantity begins, and how far it may go."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Final, Literal

import numpy as np

from bufferfolio.errors import BufferfolioError
from bufferfolio.experiments import Experiment
from bufferfolio.temperature import constants_at
from bufferfolio.water import FloatArray

Kind = Literal["strength", "total", "pK", "offset", "slope"]
MOST_FREE: Final = 4


class CannotFit(BufferfolioError):
    """What was asked to be free cannot be."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Free:
    """One quantity that a fit may change."""

    kind: Kind
    family: str = ""  # key, of a total and of a pK
    step: int = 0  # of a pK, counted from zero

    @property
    def key(self) -> str:
        """How the command and the page write it, steps counted from one: pK:phosphate:2."""
        if self.kind == "total":
            return f"total:{self.family}"
        return f"pK:{self.family}:{self.step + 1}" if self.kind == "pK" else self.kind


def nominal(experiment: Experiment, free: Sequence[Free]) -> FloatArray:
    """Return the parameters of recipe, label and an electrode without fault.

    Strength and totals are parameters as multiples of the recipe's.

    Shapes: result (parameters,).
    Units: dimensionless.
    Raises: ValueError for a family that the sample does not list.
    Source: definition.
    """
    families = experiment.mixture.families
    constants = constants_at(families, np.array(experiment.temperature))
    values = []
    for each in free:
        if each.kind == "pK":
            values.append(float(constants.pK[row_of(experiment, each.family)][each.step]))
        else:
            values.append(0.0 if each.kind == "offset" else 1.0)
    return np.array(values)


def units(experiment: Experiment, free: Sequence[Free]) -> FloatArray:
    """Return what turns parameters into the quantities they stand for.

    Shapes: result (parameters,).
    Units: mol/L for a strength, mol/kg for a total, else dimensionless.
    Raises: ValueError for a family that the sample does not list.
    Source: definition.
    """
    totals = experiment.mixture.totals
    found = {"strength": experiment.strength}
    return np.array(
        [
            float(totals[row_of(experiment, each.family)])
            if each.kind == "total"
            else found.get(each.kind, 1.0)
            for each in free
        ]
    )


def row_of(experiment: Experiment, family: str) -> int:
    """Return where a family stands in the sample; raises ValueError where it does not."""
    return [each.key for each in experiment.mixture.families].index(family)


def bounds(start: FloatArray, free: Sequence[Free]) -> tuple[FloatArray, FloatArray]:
    """Return how far each parameter may go.

    Shapes: start (parameters,); results likewise.
    Units: those of the parameters.
    Raises: nothing.
    Source: own choice, `BOUNDS`.
    """
    pairs = zip(free, start, strict=True)
    centres = np.array([value if each.kind == "pK" else 0.0 for each, value in pairs])
    low, high = np.array([BOUNDS[each.kind] for each in free]).T
    return low + centres, high + centres


def check_free(experiment: Experiment, free: Sequence[Free]) -> None:
    """Raise CannotFit where these quantities cannot be free together."""
    if not free or len(free) > MOST_FREE:
        raise CannotFit(f"{len(free)} quantities cannot be free: choose 1 to {MOST_FREE}")
    kinds = [each.kind for each in free]
    twice = next((each for each in kinds if kinds.count(each) > 1), None)
    if twice is not None:
        raise CannotFit(f"more than one {twice} is free: choose one")
    families = {each.key: each for each in experiment.mixture.families}
    for each in free:
        if each.kind not in ("total", "pK"):
            continue
        if each.family not in families:
            known = ", ".join(families) or "no family"
            raise CannotFit(f"the sample does not hold {each.family!r}; it holds: {known}")
        if each.kind == "pK" and not 0 <= each.step < len(families[each.family].steps):
            last = len(families[each.family].steps)
            raise CannotFit(f"{each.family} has no step {each.step + 1}; its steps are 1 to {last}")
        row = list(families).index(each.family)
        if each.kind == "total" and not experiment.mixture.totals[row] > 0.0:
            raise CannotFit(f"the recipe brings no {each.family} whose total could be free")


# How far from the recipe a fit may go: factors, or differences.
BOUNDS: Final[Mapping[Kind, tuple[float, float]]] = {
    "strength": (0.1, 10.0),
    "total": (0.1, 10.0),
    "pK": (-2.0, 2.0),
    "offset": (-1.5, 1.5),
    "slope": (0.7, 1.2),
}
