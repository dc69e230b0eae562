"""`bufferfolio predict`: the numbers of a sheet, as text or as JSON."""

import json
import math
from collections.abc import Iterator, Sequence
from pathlib import Path
from typing import Final

from bufferfolio import resources
from bufferfolio.activity import name_of
from bufferfolio.command.arguments import Arguments, CommandLineError, ExitCode, chosen_systems
from bufferfolio.command.console import table
from bufferfolio.definitions import Formulation, Library
from bufferfolio.equilibrium import Status
from bufferfolio.prediction import Dose, Prediction, SpeciesAmount, predictions
from bufferfolio.reading import quantities, read_formulation, read_library
from bufferfolio.reading.formulas import printed
from bufferfolio.reading.formulations import portion_amount
from bufferfolio.reading.quantities import Unfit, parse_quantity, suggestion
from bufferfolio.subjects import reference_temperature
from bufferfolio.water import ZERO_CELSIUS


def predict(arguments: Arguments) -> ExitCode:
    """Print a formulation's numbers at each temperature, after everything was added."""
    library = read_library(chosen_systems(arguments), resources.systems())
    formulation = formulation_named(arguments.formulation, library)
    temperatures = [temperature_of(text) for text in arguments.temperatures]
    temperatures = temperatures or [reference_temperature(formulation)]
    doses = [_dose(text, library) for text in arguments.additions]
    found = predictions(formulation, library, temperatures, doses)
    if arguments.json:
        print(json.dumps(as_json(formulation, arguments.additions, found), indent=1))
    else:
        print("\n".join(as_text(formulation, arguments.additions, found)))
    return ExitCode.DONE


def formulation_named(name: str, library: Library) -> Formulation:
    """Return the formulation of that key, or of the file at that path."""
    if name in library.formulations:
        return library.formulations[name]
    path = Path(name)
    if path.suffix in {".yaml", ".yml"} or path.is_file():
        if not path.is_file():
            raise CommandLineError(f"there is no file {name}")
        return read_formulation(path, library)
    close = suggestion(name, list(library.formulations))
    known = ", ".join(library.formulations) or "none; give the path of a YAML file"
    raise CommandLineError(f"unknown formulation {name!r}{close}\naccepted: {known}")


def temperature_of(text: str) -> float:
    """Return a temperature (K) as it was typed."""
    try:
        return parse_quantity(text, quantities.WATER_TEMPERATURE).value
    except Unfit as problem:
        raise CommandLineError(f"temperature {problem}\naccepted: {problem.accepted}") from None


def _dose(text: str, library: Library) -> Dose:
    key, _, amount = text.strip().partition(" ")
    if key not in library.reagents:
        close = suggestion(key, list(library.reagents))
        accepted = 'a reagent and an amount, such as "sodium-hydroxide 5 mmol"'
        raise CommandLineError(f"unknown reagent {key!r} in --add{close}\naccepted: {accepted}")
    reagent = library.reagents[key]
    try:
        measured = parse_quantity(amount, *DOSE_UNITS)
        moles, _ = portion_amount(measured, reagent, None)
        if moles < 0.0:
            raise Unfit(f"is negative: {amount!r}", "an amount that is added")
    except Unfit as problem:
        message = f"amount of {key} in --add {problem}\naccepted: {problem.accepted}"
        raise CommandLineError(message) from None
    return Dose(reagent=reagent, amount=moles)


def as_text(
    formulation: Formulation, additions: Sequence[str], found: Sequence[Prediction]
) -> Iterator[str]:
    """Yield the lines that people read."""
    model = found[0].model.label
    chosen = "" if formulation.model else ", chosen by the ionic strength"
    yield f"{formulation.title}, revision {formulation.revision}; activities: {model}{chosen}"
    for addition in additions:
        yield f"added to the whole make-up: {addition}"
    for prediction in found:
        state = prediction.state
        yield f"\nat {state.temperature - ZERO_CELSIUS:.4g} °C"
        yield f"  pH                {_fixed(state.pH)}  {PH_SCALE}"
        yield f"  ionic strength    {_figures(state.ionic_strength)} mol/kg"
        yield f"  buffer capacity   {_figures(state.capacity)} mol/kg per pH"
        yield from (f"  warning: {warning}" for warning in warnings(formulation, prediction))
        rows = [_row(species) for species in prediction.species]
        head = ["species", "mol/kg", "fraction", "family"]
        for line in table(head, rows, right=frozenset({1, 2})).splitlines():
            yield f"  {line}"


def _row(species: SpeciesAmount) -> list[str]:
    fraction = "" if species.fraction is None else _figures(species.fraction)
    return [
        species.label or printed(species.name),
        _figures(species.molality),
        fraction,
        species.family or "",
    ]


def _fixed(value: float) -> str:
    return "no solution" if math.isnan(value) else f"{value:.3f}"


def _figures(value: float) -> str:
    return "-" if math.isnan(value) else f"{value:.4g}"


def warnings(formulation: Formulation, prediction: Prediction) -> list[str]:
    """Return in words what is doubtful about a prediction."""
    state, found = prediction.state, []
    if state.status != Status.SOLVED:
        found.append(STATUS_WORDS[state.status])
    use = formulation.use_temperature
    # A thousandth of a kelvin: a limit typed in other units must not fall outside.
    if not use.low - 1e-3 <= state.temperature <= use.high + 1e-3:
        found.append("the temperature is outside the limits of use")
    if not math.isnan(state.pH) and not formulation.use_pH.holds(state.pH):
        found.append("the pH is outside the limits of use")
    return found


def as_json(
    formulation: Formulation, additions: Sequence[str], found: Sequence[Prediction]
) -> dict[str, object]:
    """Return what --json prints; the keys are explained in DEVELOPERS.md. null: no solution."""
    return {
        "formulation": formulation.key,
        "title": formulation.title,
        "revision": formulation.revision,
        "model": name_of(found[0].model),
        "model_chosen_by": "ionic strength" if formulation.model is None else "file",
        "pH_scale": PH_SCALE,
        "added": list(additions),
        "states": [_state(formulation, prediction) for prediction in found],
    }


def _state(formulation: Formulation, prediction: Prediction) -> dict[str, object]:
    state = prediction.state
    return {
        "temperature_celsius": _json_number(state.temperature - ZERO_CELSIUS),
        "pH": _json_number(state.pH),
        "ionic_strength": _json_number(state.ionic_strength),
        "buffer_capacity": _json_number(state.capacity),
        "status": Status(state.status).name.lower().replace("_", " "),
        "warnings": warnings(formulation, prediction),
        "species": [
            {
                "name": species.name,
                "label": species.label or printed(species.name),
                "family": species.family,
                "charge": species.charge,
                "molality": _json_number(species.molality),
                "fraction": None if species.fraction is None else _json_number(species.fraction),
            }
            for species in prediction.species
        ],
    }


def _json_number(value: float) -> float | None:
    # Twelve figures: what the solver vouches for, without the noise of the last bits.
    return float(f"{value:.12g}") if math.isfinite(value) else None


PH_SCALE: Final = "activity scale, −log10 a(H+)"

DOSE_UNITS: Final = (quantities.SUBSTANCE, quantities.MASS, quantities.VOLUME)

STATUS_WORDS: Final = {
    Status.OUT_OF_RANGE: "a constant is used outside its source's temperatures",
    Status.BEYOND_MODEL: "the ionic strength is above what the activity model is trusted to",
    Status.NO_SOLUTION: "the equations have no solution here",
}
