"""Titrations that tests make up: a shipped formulation, a sample, a titrant, and noise."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from bufferfolio.experiments import Experiment, experiment_of
from bufferfolio.fit_model import modelled
from bufferfolio.fit_parameters import Free, nominal
from bufferfolio.measured import Points, Precision
from recipes import shipped

SAMPLE = 5e-5  # m3


@dataclass(frozen=True, slots=True, kw_only=True)
class Made:
    """A made-up titration, with the truth behind it."""

    experiment: Experiment
    points: Points
    free: tuple[Free, ...]
    truth: np.ndarray  # parameters
    precision: Precision


@dataclass(frozen=True, slots=True)
class Plan:
    """What is titrated with what, as far as what volume, and what differs from the recipe."""

    formulation: str
    titrant: int
    last: float  # mL
    free: str
    differs: Sequence[float]


PLANS = (
    Plan("tris-assay", 0, 4.0, "strength,total:tris,pK:tris:1,offset", (0.1, 0.05, 0.05, 0.03)),
    Plan("tris-assay", 1, 4.0, "strength,pK:tris:1,slope", (0.1, 0.05, -0.02)),
    Plan("citrate-phosphate", 0, 6.0, "strength,pK:phosphate:2,offset", (0.1, 0.05, 0.03)),
    Plan("meter-check-phthalate", 0, 50.0, "strength,total:phthalate,slope", (-0.5, 0.05, 0.03)),
    Plan("holding-water", 1, 2.0, "total:carbonate,pK:carbonate:1,offset", (0.05, 0.05, 0.02)),
    Plan("acetate-extract", 0, 4.0, "strength,offset,slope", (-0.2, 0.1, -0.03)),
    Plan("meter-check-borax", 1, 30.0, "strength,total:borate", (0.3, 0.1)),
)


def free_quantities(text: str) -> tuple[Free, ...]:
    """Return the quantities of "strength,pK:tris:1"."""
    found = []
    for part in text.split(","):
        kind, *rest = part.split(":")
        step = int(rest[1]) - 1 if len(rest) > 1 else 0
        found.append(Free(kind=kind, family=rest[0] if rest else "", step=step))
    return tuple(found)


def titration_of(formulation: str, titrant: int) -> Experiment:
    """Return the titration of a sample of a shipped formulation with one of its titrants."""
    library = shipped()
    chosen = library.formulations[formulation]
    return experiment_of(chosen, library, chosen.titrants[titrant], 298.15, SAMPLE)


def made(plan: Plan, count: int, seed: int, reading: float = 0.01, share: float = 3e-4) -> Made:
    """Return a titration with noise in readings, and in volumes as a share of the last."""
    random = np.random.default_rng(seed)
    experiment = titration_of(plan.formulation, plan.titrant)
    free = free_quantities(plan.free)
    truth = nominal(experiment, free) + np.array(plan.differs)
    last = plan.last * 1e-6
    volume = np.linspace(0.0, last, count)
    # The first point stands before any titrant: its volume is zero and exact.
    really = np.abs(volume + share * last * random.normal(size=count) * (volume > 0.0))
    pH = modelled(experiment, really, free, truth).reading + reading * random.normal(size=count)
    return Made(
        experiment=experiment,
        points=Points(volume=volume, pH=pH, rows=tuple(range(1, count + 1))),
        free=free,
        truth=truth,
        precision=Precision(pH=reading, volume=share * last),
    )
