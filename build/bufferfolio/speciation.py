"""How each family of a mixture shares itself out over its forms at a given pH."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from bufferfolio.activity import ActivityModel
from bufferfolio.definitions import Family, Interaction, Ion
from bufferfolio.temperature import LN10, Constants
from bufferfolio.water import FloatArray


@dataclass(frozen=True, slots=True, kw_only=True)
class Mixture:
    """What is in the water: totals of families and of ions that keep their charge."""

    families: tuple[Family, ...]
    totals: FloatArray  # (families, *S), mol/kg
    ions: tuple[Ion, ...]
    molalities: FloatArray  # (ions, *S), mol/kg

    @property
    def strong_charge(self) -> FloatArray:
        """Net charge of the ions that keep theirs, S, mol/kg."""
        return _weighted([ion.charge for ion in self.ions], self.molalities)

    @property
    def strong_strength(self) -> FloatArray:
        """Sum of z² m over the ions that keep their charge, S, mol/kg."""
        return _weighted([ion.charge**2 for ion in self.ions], self.molalities)

    @property
    def species(self) -> tuple[str, ...]:
        """Names in the order of every species axis: H+, OH-, each family's forms, the ions."""
        forms = [form.name for family in self.families for form in family.species]
        return ("H+", "OH-", *forms, *(ion.name for ion in self.ions))


@dataclass(frozen=True, slots=True, kw_only=True)
class Forms:
    """Molalities of everything in a mixture at a given pH and ionic strength."""

    hydrogen: FloatArray  # S, mol/kg
    hydroxide: FloatArray  # S, mol/kg
    families: tuple[FloatArray, ...]  # one array (forms, *S) a family, mol/kg
    fractions: tuple[FloatArray, ...]  # one array (forms, *S) a family


def _weighted(weights: Sequence[int], amounts: FloatArray) -> FloatArray:
    # Not a matrix product: its summation order must not depend on the machine's library.
    total = np.zeros(amounts.shape[1:])
    for weight, amount in zip(weights, amounts, strict=True):
        total = total + weight * amount
    return total


def fractions(
    charge: int, pK: FloatArray, pH: FloatArray, debye_term: FloatArray, offsets: FloatArray | None
) -> FloatArray:
    """Return the share of each form of one family.

    Shapes: charge of the first form scalar; pK (steps, *S); pH S; debye_term S, the D of
        log10 γ = −z² D + offset; offsets (forms, *S) or None; result (forms, *S).
    Units: all dimensionless.
    Raises: nothing.
    Source: mass action, m_j γ_j a(H) = K_j m_(j−1) γ_(j−1), any textbook.
    """
    lost = np.arange(pK.shape[0] + 1).reshape(-1, *([1] * (pK.ndim - 1)))
    z_squared = (charge - lost) ** 2
    logs = lost * pH + z_squared * debye_term
    logs[1:] -= np.cumsum(pK, axis=0)
    if offsets is not None:
        logs = logs - offsets
    # Taken from the largest so that nothing overflows.
    weights = np.exp(LN10 * (logs - logs.max(axis=0)))
    result: FloatArray = weights / weights.sum(axis=0)
    return result


def forms_at(
    mixture: Mixture,
    constants: Constants,
    model: ActivityModel,
    pH: FloatArray,
    ionic_strength: FloatArray,
    offsets: FloatArray | None = None,
) -> Forms:
    """Return the molality of every form at a given pH and ionic strength.

    Shapes: pH and ionic_strength S; offsets (species, *S) or None; results see `Forms`.
    Units: ionic_strength mol/kg; results mol/kg.
    Raises: nothing.
    Source: mass action with the model's activity coefficients.
    """
    term, _ = model.long_range(constants.debye_huckel, ionic_strength)
    shares, molalities = [], []
    start = 2
    for family, total, pK in zip(mixture.families, mixture.totals, constants.pK, strict=True):
        stop = start + len(family.species)
        own = None if offsets is None else offsets[start:stop]
        share = fractions(family.charge, pK, pH, term, own)
        shares.append(share)
        molalities.append(share * total)
        start = stop
    hydrogen_offset = 0.0 if offsets is None else offsets[0]
    hydroxide_offset = 0.0 if offsets is None else offsets[1]
    return Forms(
        hydrogen=10.0 ** (term - pH - hydrogen_offset),
        hydroxide=10.0 ** (pH - constants.pKw + term - hydroxide_offset),
        families=tuple(molalities),
        fractions=tuple(shares),
    )


def stacked(forms: Forms, mixture: Mixture) -> FloatArray:
    """Return every molality of a mixture along one species axis.

    Shapes: result (species, *S), in the order of `Mixture.species`.
    Units: mol/kg.
    Raises: nothing.
    Source: definition.
    """
    shape = forms.hydrogen.shape
    strong = np.broadcast_to(mixture.molalities, (len(mixture.ions), *shape))
    return np.concatenate([[forms.hydrogen], [forms.hydroxide], *forms.families, strong])


def interaction_matrix(mixture: Mixture, interactions: Sequence[Interaction]) -> FloatArray | None:
    """Return the pair coefficients of a mixture's species, or None where none is published.

    Shapes: result (species, species), symmetric.
    Units: kg/mol.
    Raises: nothing.
    Source: each interaction's own; an unpublished pair counts as zero.
    """
    index = {name: position for position, name in enumerate(mixture.species)}
    matrix = np.zeros((len(index), len(index)))
    for pair in interactions:
        if pair.cation in index and pair.anion in index:
            a, b = index[pair.cation], index[pair.anion]
            matrix[a, b] = matrix[b, a] = pair.epsilon
    return matrix if matrix.any() else None
