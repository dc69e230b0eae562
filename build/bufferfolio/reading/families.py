"""Family files to definitions."""

from itertools import pairwise
from typing import Final

from bufferfolio.definitions import (
    Citation,
    Family,
    Interval,
    PublishedEquation,
    ReferenceConstants,
    Source,
    Species,
    Step,
)
from bufferfolio.reading.formulas import Formula, parse_formula, printed
from bufferfolio.reading.known import Complaints, Known
from bufferfolio.reading.models import Cited, EquationShape, FamilyShape, PKShape, StepShape
from bufferfolio.reading.nodes import Document, Location
from bufferfolio.reading.quantities import Unfit


def family(
    key: str, document: Document, shape: FamilyShape, sources: Known[Source]
) -> tuple[Family | None, Complaints]:
    """Return the family, or None with complaints about the file."""
    complaints = Complaints(document)
    species = _species(shape, complaints)
    if len(shape.species) > 1 and len(shape.steps) != len(shape.species) - 1:
        forms = len(shape.species)
        problem = f"steps has {entries(len(shape.steps))} for {forms} species"
        accepted = f"{forms - 1}: one for each proton that is lost"
        complaints.at_key(("steps",), problem, accepted)
    steps = [
        _step(complaints, step, ("steps", number), sources)
        for number, step in enumerate(shape.steps)
    ]
    sound = [step for step in steps if step is not None]
    if complaints.errors or len(sound) != len(steps):
        return None, complaints
    return Family(
        key=key,
        label=shape.label,
        synonyms=tuple(shape.synonyms),
        species=species,
        steps=tuple(sound),
        note=shape.note,
        place=document.root.place,
    ), complaints


def _species(shape: FamilyShape, complaints: Complaints) -> tuple[Species, ...]:
    labels = shape.labels or [printed(name) for name in shape.species]
    if len(labels) != len(shape.species):
        problem = f"labels has {entries(len(labels))} for {len(shape.species)} species"
        complaints.at_key(("labels",), problem, "one for each of the species")
    if len(shape.species) < 2:
        problem = f"species has {entries(len(shape.species))}"
        complaints.at_key(("species",), problem, "at least two, most protons first")
    formulas: list[Formula | None] = []
    for number, name in enumerate(shape.species):
        try:
            formulas.append(parse_formula(name))
        except Unfit as problem:
            formulas.append(None)
            complaints.at(("species", number), f"species {problem.problem}", problem.accepted)
    for number, (richer, poorer) in enumerate(pairwise(formulas), start=1):
        if richer is not None and poorer is not None:
            _compare(richer, poorer, ("species", number), complaints)
    return tuple(
        Species(name=name, label=label, charge=formula.charge)
        for name, label, formula in zip(shape.species, labels, formulas, strict=False)
        if formula is not None
    )


def _compare(richer: Formula, poorer: Formula, location: Location, complaints: Complaints) -> None:
    # A neighbour may hold one H2O more or less: CO2 and HCO3-, B(OH)3 and B(OH)4-.
    symbols = {*richer.atoms, *poorer.atoms}
    gained = {s: poorer.atoms.get(s, 0.0) - richer.atoms.get(s, 0.0) for s in symbols}
    water, hydrogen = gained.pop("O", 0.0), gained.pop("H", 0.0)
    one_proton = not any(gained.values()) and hydrogen == 2 * water - 1 and abs(water) <= 1
    if one_proton and poorer.charge == richer.charge - 1:
        return
    problem = f"species {poorer.text!r} is not {richer.text!r} less one proton"
    if one_proton:
        problem += f": its charge is {_signed(poorer.charge)}, not {_signed(richer.charge - 1)}"
    accepted = "neighbours that differ by H+ (and at most one H2O), the charge one lower"
    complaints.at(location, problem, accepted)


def _signed(charge: int) -> str:
    return f"{charge:+d}" if charge else "0"


def entries(count: int) -> str:
    """Return a number of entries in words."""
    return "1 entry" if count == 1 else f"{count} entries"


def _step(
    complaints: Complaints, shape: StepShape, location: Location, sources: Known[Source]
) -> Step | None:
    main = shape.equation or shape.pK
    if not _one_way(complaints, shape, location) or main is None:
        return None
    low, high = shape.valid[0], shape.valid[1]
    if shape.pK is not None and not low <= shape.pK.at <= high:
        problem = "at lies outside the temperatures in `valid`"
        complaints.at((*location, "pK", "at"), problem, "a temperature within `valid`")
    name = "equation" if shape.equation else "pK"
    cited = cite(complaints, main, (*location, name), sources)
    enthalpy = cite(complaints, shape.enthalpy, (*location, "enthalpy"), sources)
    heat_capacity = cite(complaints, shape.heat_capacity, (*location, "heat_capacity"), sources)
    if cited is None:
        return None
    return Step(
        law=published(main) if isinstance(main, EquationShape) else _reference(shape, main),
        valid_temperature=Interval(low=low, high=high),
        uncertainty=main.uncertainty,
        citation=cited,
        enthalpy_citation=enthalpy,
        heat_capacity_citation=heat_capacity,
        alternative=shape.alternative,
        place=complaints.document.place(location),
    )


def _reference(shape: StepShape, main: PKShape) -> ReferenceConstants:
    return ReferenceConstants(
        pK=main.value,
        temperature=main.at,
        enthalpy=shape.enthalpy.value if shape.enthalpy else None,
        heat_capacity=shape.heat_capacity.value if shape.heat_capacity else None,
    )


def _one_way(complaints: Complaints, shape: StepShape, location: Location) -> bool:
    """Say whether the step has either an equation or the three constants, and not a mixture."""
    given = shape.model_fields_set
    constants = ("pK", "enthalpy", "heat_capacity")
    if "equation" in given:
        for name in constants:
            if name in given:
                problem = f"{name} stands beside an equation"
                complaints.at_key((*location, name), problem, ONE_WAY)
        return not given.intersection(constants)
    for name in constants:
        if name not in given:
            complaints.at(location, f"a step lacks the key {name!r}", ONE_WAY)
    return given.issuperset(constants) and shape.pK is not None


def published(shape: EquationShape) -> PublishedEquation:
    """Return an equation as pK in natural logarithms, whatever it was published for."""
    terms = shape.terms
    factor = FACTORS[shape.gives]
    return PublishedEquation(
        name=shape.name,
        constant=factor * terms.constant,
        inverse=factor * terms.inverse,
        linear=factor * terms.linear,
        logarithm=factor * (terms.logarithm + terms.log10 / LN10),
        inverse_square=factor * terms.inverse_square,
    )


def cite(
    complaints: Complaints, shape: Cited | None, location: Location, sources: Known[Source]
) -> Citation | None:
    """Return where a value comes from, with its work looked up."""
    if shape is None:
        return None
    source = complaints.find(sources, shape.source, (*location, "source"))
    if source is None:
        return None
    return Citation(source=source, where=shape.where, how_known=shape.how_known)


ONE_WAY: Final = (
    "either `equation`, or `pK`, `enthalpy` and `heat_capacity` (a value or `not stated` each)"
)
LN10: Final = 2.302585092994046
# What an equation gives, and the factor that makes it a pK.
FACTORS: Final = {"pK": 1.0, "log10 K": -1.0, "ln K": -1.0 / LN10}
