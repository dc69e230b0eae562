"""What stands in the beaker and what runs into it: a titration, before anything is measured."""

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from bufferfolio.activity import ActivityModel
from bufferfolio.composition import LITRE, Addition
from bufferfolio.definitions import Formulation, Interaction, Library, Titrant
from bufferfolio.errors import BufferfolioError
from bufferfolio.speciation import Mixture
from bufferfolio.subjects import subject_of
from bufferfolio.titration import Curve, titrate
from bufferfolio.water import FloatArray, density


class NotALiquid(BufferfolioError):
    """A titrant that no burette can deliver."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Experiment:
    """A sample of a formulation at one temperature, and the titrant that runs into it."""

    mixture: Mixture  # of one kg of the sample's water; lists what the titrant brings
    water: float  # kg in the sample
    added: Addition  # one mole of titrant, as its label says
    temperature: float  # K
    model: ActivityModel
    interactions: tuple[Interaction, ...]

    @property
    def strength(self) -> float:
        """The titrant's strength as its label says, mol/L."""
        return LITRE / (self.added.volume or np.nan)


def experiment_of(
    formulation: Formulation,
    library: Library,
    titrant: Titrant,
    temperature: float,
    sample_volume: float | None = None,
) -> Experiment:
    """Return the titration of a sample, or of the whole make-up where no volume is given.

    A sample counts as its volume of water at the temperature of the titration.

    Shapes: scalars.
    Units: temperature K; sample_volume m3.
    Raises: NotALiquid for a titrant that is weighed.
    Source: definition; the approximation as in `composition.water_mass`.
    """
    subject = subject_of(replace(formulation, titrants=(*formulation.titrants, titrant)), library)
    added = subject.additions[-1]
    if added.volume is None:
        raise NotALiquid(f"{titrant.label} is a solid: its solution needs a strength")
    water = subject.water
    if sample_volume is not None:
        water = sample_volume * float(density(np.array(temperature)))
    return Experiment(
        mixture=subject.mixture,
        water=water,
        added=added,
        temperature=temperature,
        model=subject.model,
        interactions=subject.interactions,
    )


def amounts(experiment: Experiment, volume: FloatArray) -> FloatArray:
    """Return the amount of titrant in each volume.

    Shapes: volume S; result S.
    Units: volume m3; result mol per kg of the sample's water.
    Raises: nothing.
    Source: definition.
    """
    per_mole = (experiment.added.volume or np.nan) * experiment.water
    result: FloatArray = volume / per_mole
    return result


def predicted_curve(experiment: Experiment, volume: FloatArray) -> Curve:
    """Return what recipe and label lead one to expect after each volume of titrant.

    Shapes: volume S; results S.
    Units: volume m3.
    Raises: nothing.
    Source: `titration.titrate`.
    """
    return titrate(
        experiment.mixture,
        experiment.added,
        amounts(experiment, volume),
        np.array(experiment.temperature),
        experiment.model,
        experiment.interactions,
    )


def with_strength(added: Addition, factor: float) -> Addition:
    """Return a titrant of other strength: per volume as much water, and a multiple of the rest."""
    return replace(
        added,
        per_family=tuple(share * factor for share in added.per_family),
        per_ion=tuple(share * factor for share in added.per_ion),
    )


def suited(titrants: Sequence[Titrant], pH: FloatArray) -> Titrant | None:
    """Return the first liquid titrant that moves readings the way they went.

    Shapes: pH n, in the order of addition; result one titrant or None.
    Units: dimensionless.
    Raises: nothing.
    Source: definition.
    """
    direction = "upward" if pH.size and pH[-1] >= pH[0] else "downward"
    liquid = [each for each in titrants if each.molarity or each.reagent.stock is not None]
    return next((each for each in liquid if each.direction == direction), None)
