"""Formulation files to definitions."""

from collections.abc import Mapping
from typing import Final, Literal

from bufferfolio.definitions import (
    Expectation,
    Family,
    Formulation,
    Interval,
    MakeUp,
    Portion,
    Reagent,
    Titrant,
    Tolerances,
)
from bufferfolio.reading import quantities
from bufferfolio.reading.dangers import dangers
from bufferfolio.reading.known import Complaints, Known
from bufferfolio.reading.models import FormulationShape, MakeUpShape
from bufferfolio.reading.nodes import Document, Location
from bufferfolio.reading.quantities import Measured, Unfit, suggestion


def formulation(
    key: str,
    document: Document,
    shape: FormulationShape,
    reagents: Known[Reagent],
    families: Mapping[str, Family],
) -> tuple[Formulation | None, Complaints]:
    """Return the formulation, or None with complaints about the file."""
    complaints = Complaints(document)
    make_up = _make_up(shape.make_up, reagents, complaints)
    titrants = _titrants(shape, reagents, complaints)
    whole = make_up is not None and len(titrants) == len(shape.correct_with)
    if make_up is not None and whole:
        present = [portion.reagent for portion in make_up.portions]
        present += [titrant.reagent for titrant in titrants]
        _check_dangers(shape, present, families, complaints)
    if complaints.errors or make_up is None or not whole:
        return None, complaints
    expected = shape.expected
    return Formulation(
        key=key,
        title=shape.title,
        revision=shape.revision,
        purpose=shape.purpose,
        make_up=make_up,
        expected=None
        if expected is None
        else Expectation(
            pH=expected.pH,
            temperature=expected.at,
            tolerance=expected.tolerance,
            origin=expected.origin,
        ),
        use_temperature=Interval(low=shape.use.temperature[0], high=shape.use.temperature[1]),
        use_pH=Interval(low=shape.use.pH[0], high=shape.use.pH[1]),
        titrants=titrants,
        medium=shape.medium,
        model=shape.model,
        cautions=tuple(shape.cautions),
        accepted_dangers=tuple(shape.explains),
        tolerances=_tolerances(shape),
        never_corrected=shape.corrected == "never",
        place=document.root.place,
    ), complaints


def _tolerances(shape: FormulationShape) -> Tolerances:
    stated = shape.tolerances
    if stated is None:
        return Tolerances()
    return Tolerances(
        weighing=stated.weighing,
        volume=stated.volume,
        temperature=stated.temperature,
        meter=stated.meter,
        model=stated.model,
    )


def _make_up(shape: MakeUpShape, reagents: Known[Reagent], complaints: Complaints) -> MakeUp | None:
    measure = shape.made_up_to or shape.water
    if measure is None:
        complaints.at(("make_up",), "make_up lacks `made_up_to` or `water`", ONE_MEASURE)
        return None
    if shape.made_up_to and shape.water:
        complaints.at_key(("make_up", "water"), "water stands beside `made_up_to`", ONE_MEASURE)
    by_volume = measure.dimension == quantities.VOLUME.name
    volume = measure.value if by_volume else None
    portions = []
    for number, portion in enumerate(shape.reagents):
        location = ("make_up", "reagents", number)
        reagent = complaints.find(reagents, portion.reagent, (*location, "reagent"))
        if reagent is None:
            continue
        try:
            amount, basis = portion_amount(portion.amount, reagent, volume)
        except Unfit as problem:
            complaints.at((*location, "amount"), f"amount {problem.problem}", problem.accepted)
            continue
        place = complaints.document.place(location)
        portions.append(
            Portion(
                reagent=reagent,
                amount=amount,
                basis=basis,
                stated=portion.amount.stated,
                weighed=reagent.stock is None or portion.amount.dimension in MASSES,
                place=place,
            )
        )
    if len(portions) != len(shape.reagents):
        return None
    return MakeUp(
        basis="made up to" if shape.made_up_to else "water added",
        volume=volume,
        mass=None if by_volume else measure.value,
        temperature=shape.at,
        portions=tuple(portions),
    )


def _titrants(
    shape: FormulationShape, reagents: Known[Reagent], complaints: Complaints
) -> tuple[Titrant, ...]:
    titrants = []
    for number, titrant in enumerate(shape.correct_with):
        location = ("correct_with", number, "reagent")
        reagent = complaints.find(reagents, titrant.reagent, location)
        if reagent is None:
            continue
        diluted = titrant.diluted
        titrants.append(
            Titrant(
                reagent=reagent,
                direction=titrant.direction,
                molarity=None if diluted is None else diluted.value / LITRES_PER_M3,
                label=_titrant_label(reagent, diluted.stated if diluted else ""),
            )
        )
    return tuple(titrants)


def _titrant_label(reagent: Reagent, strength: str) -> str:
    # A bottle's own strength stands in its name: the two must not be taken for each other.
    if not strength:
        return reagent.label
    return f"{reagent.label}, {strength if reagent.stock is None else f'diluted to {strength}'}"


def _check_dangers(
    shape: FormulationShape,
    present: list[Reagent],
    families: Mapping[str, Family],
    complaints: Complaints,
) -> None:
    for danger, (giver, partner) in dangers(present, families).items():
        if danger not in shape.explains:
            problem = f"{giver} and {partner} give {danger}, which the file does not explain"
            accepted = f"`explains: [{danger}]` with a caution about it, or another reagent"
            complaints.at(_whereabouts(shape, giver), problem, accepted)
    possible = sorted({danger for reagent in present for danger in reagent.releases})
    for number, explained in enumerate(shape.explains):
        if explained not in possible:
            close = suggestion(explained, possible)
            problem = f"no reagent here gives {explained!r}{close}"
            complaints.at(("explains", number), problem, ", ".join(possible) or "no such entry")
    if shape.explains and not shape.cautions:
        problem = "explains stands without cautions"
        complaints.at_key(("explains",), problem, "a caution that explains each danger")


def _whereabouts(shape: FormulationShape, key: str) -> Location:
    for number, portion in enumerate(shape.make_up.reagents):
        if portion.reagent == key:
            return ("make_up", "reagents", number, "reagent")
    keys = [titrant.reagent for titrant in shape.correct_with]
    return ("correct_with", keys.index(key), "reagent")


def portion_amount(
    measured: Measured, reagent: Reagent, volume: float | None
) -> tuple[float, Literal["mol", "mol/kg"]]:
    """Return mol of the reagent's formula, in the make-up or per kg of water."""
    share = reagent.stock.mass_fraction if reagent.stock else reagent.purity
    per_kg = share / reagent.molar_mass  # mol of formula in a kg of what is on the shelf
    kind = measured.dimension
    if kind == quantities.SUBSTANCE.name:
        return measured.value, "mol"
    if kind == quantities.MASS.name:
        return measured.value * per_kg, "mol"
    if kind == quantities.MOLALITY.name:
        return measured.value, "mol/kg"
    if kind == quantities.PERCENT.name:
        return measured.value * per_kg, "mol/kg"
    if kind == quantities.VOLUME.name:
        if reagent.stock is None:
            problem = f"is a volume, and {reagent.key} is a solid: {measured.stated!r}"
            raise Unfit(problem, SOLID_UNITS)
        return measured.value * reagent.stock.density * per_kg, "mol"
    if volume is None:
        problem = f"is per volume, and the water is given by mass: {measured.stated!r}"
        raise Unfit(problem, WEIGHED_UNITS)
    factor = 1.0 if kind == quantities.MOLARITY.name else per_kg
    return measured.value * volume * factor, "mol"


# Amounts for which a liquid, too, goes on a balance.
MASSES: Final = tuple(
    each.name for each in (quantities.MASS, quantities.MASS_PER_VOLUME, quantities.PERCENT)
)
SOLID_UNITS: Final = "g, mg, kg, mol, mmol, mol/L, mmol/L, mol/kg, mmol/kg, g/L, mg/L, %"
WEIGHED_UNITS: Final = "g, mg, kg, mL, L, mol, mmol, mol/kg, mmol/kg, %"
LITRES_PER_M3: Final = 1000.0
ONE_MEASURE: Final = "`made_up_to` (volume of the solution) or `water` (added); one of the two"
