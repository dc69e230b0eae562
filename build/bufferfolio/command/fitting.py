"""`bufferfolio fit`: what a measured titration says of titrant, sample and electrode."""

import json
from pathlib import Path
from typing import Final, Literal, get_args

from bufferfolio import resources
from bufferfolio.command.arguments import Arguments, CommandLineError, ExitCode, chosen_systems
from bufferfolio.command.fit_report import Findings, as_json, as_text
from bufferfolio.command.predicting import formulation_named, temperature_of
from bufferfolio.definitions import Formulation, Library, Titrant
from bufferfolio.end_points import end_points
from bufferfolio.errors import DefinitionError, DefinitionErrors, Place
from bufferfolio.experiments import NotALiquid, experiment_of, suited
from bufferfolio.fit_parameters import CannotFit, Free, Kind
from bufferfolio.fitting import fit
from bufferfolio.gran import gran_lines
from bufferfolio.measured import Points, Precision, default_precision, parsed, text_of
from bufferfolio.measured_layout import UNITS, Layout
from bufferfolio.reading import quantities, read_library
from bufferfolio.reading.files import shown
from bufferfolio.reading.quantities import Unfit, parse_number, parse_quantity, suggestion
from bufferfolio.subjects import reference_temperature


def fit_data(arguments: Arguments) -> ExitCode:
    """Fit the model curve of a formulation to measured points, and print the result."""
    library = read_library(chosen_systems(arguments), resources.systems())
    formulation = formulation_named(arguments.formulation, library)
    points, layout = _read(arguments.data, arguments.unit)
    found = _findings(arguments, library, formulation, points, layout)
    if arguments.json:
        print(json.dumps(as_json(found), indent=1))
    else:
        print("\n".join(as_text(found)))
    return ExitCode.DONE


def _findings(
    arguments: Arguments, library: Library, formulation: Formulation, points: Points, layout: Layout
) -> Findings:
    titrant = _titrant(arguments.titrant, formulation, library, points)
    kelvin = [temperature_of(text) for text in arguments.temperatures[-1:]]
    temperature = kelvin[0] if kelvin else reference_temperature(formulation)
    sample = arguments.sample_volume
    volume = _volume(sample, "sample volume") if sample else None
    free = [free_of(text) for text in arguments.free]
    precision = _precision(arguments, default_precision(points))
    try:
        experiment = experiment_of(formulation, library, titrant, temperature, volume)
        result = fit(experiment, points, free, precision)
    except (CannotFit, NotALiquid) as problem:
        raise CommandLineError(str(problem)) from None
    seen = end_points(points)
    return Findings(
        formulation=formulation,
        titrant=titrant,
        sample=sample,
        points=points,
        layout=layout,
        end_points=seen,
        gran_lines=gran_lines(experiment, points, seen, precision),
        fit=result,
    )


def _read(path: Path, unit: str) -> tuple[Points, Layout]:
    """Return the points of a file; raises DefinitionErrors for whatever is wrong with it."""
    if unit not in UNITS:
        raise CommandLineError(f"unknown unit {unit!r} in --unit\naccepted: {', '.join(UNITS)}")
    if path.stat().st_size > LARGEST:
        place = Place(shown(path), 1, 1)
        problem, accepted = "the file is too large", f"at most {LARGEST} bytes"
        raise DefinitionErrors([DefinitionError(place, problem, accepted=accepted)])
    read = parsed(text_of(path.read_bytes()), unit)
    errors = [
        DefinitionError(
            Place(shown(path), each.row, each.column),
            each.problem,
            accepted=each.accepted,
            line_text=each.line,
        )
        for each in read.complaints
    ]
    if len(errors) > MOST_COMPLAINTS:
        more = f"{len(errors) - MOST_COMPLAINTS} more places are wrong"
        last = DefinitionError(errors[MOST_COMPLAINTS].place, more, accepted="as above")
        raise DefinitionErrors([*errors[:MOST_COMPLAINTS], last])
    if read.points is None or read.layout is None:
        raise DefinitionErrors(errors)
    return read.points, read.layout


def _titrant(text: str, formulation: Formulation, library: Library, points: Points) -> Titrant:
    """Return the titrant that is named, else the formulation's own that goes the readings' way."""
    if not text:
        found = suited(formulation.titrants, points.pH)
        if found is None:
            raise CommandLineError(
                "the formulation has no liquid titrant that moves the pH the way it went\n"
                f"accepted: --titrant {EXAMPLE}"
            )
        return found
    key, _, strength = text.strip().partition(" ")
    own = [each for each in formulation.titrants if each.reagent.key == key]
    if own and not strength:
        return own[0]
    if key not in library.reagents:
        close = suggestion(key, list(library.reagents))
        problem = f"unknown reagent {key!r} in --titrant{close}\naccepted: {EXAMPLE}"
        raise CommandLineError(problem)
    molarity = _measured(strength, "strength in --titrant", quantities.MOLARITY) if strength else 0
    reagent = library.reagents[key]
    direction: Literal["upward", "downward"] = (
        "upward" if points.pH[-1] >= points.pH[0] else "downward"
    )
    return Titrant(
        reagent=reagent,
        direction=direction,
        molarity=molarity / 1000.0 or None,
        label=f"{reagent.label}, {strength.strip()}" if strength else reagent.label,
    )


def _measured(text: str, what: str, dimension: quantities.Dimension) -> float:
    try:
        value = parse_quantity(text, dimension).value
        if not value > 0.0:
            raise Unfit(f"is not positive: {text!r}", f"such as {dimension.example}")
    except Unfit as problem:
        raise CommandLineError(f"{what} {problem}\naccepted: {problem.accepted}") from None
    return value


def _volume(text: str, what: str) -> float:
    return _measured(text, what, quantities.VOLUME)


def _precision(arguments: Arguments, usual: Precision) -> Precision:
    reading, volume = usual.pH, usual.volume
    if arguments.reading_uncertainty:
        try:
            reading = parse_number(arguments.reading_uncertainty)
            if not reading > 0.0:
                raise Unfit(f"is not positive: {arguments.reading_uncertainty!r}", "such as 0.02")
        except Unfit as problem:
            words = f"reading uncertainty {problem}\naccepted: {problem.accepted}"
            raise CommandLineError(words) from None
    if arguments.volume_uncertainty:
        volume = _volume(arguments.volume_uncertainty, "volume uncertainty")
    return Precision(pH=reading, volume=volume)


def free_of(text: str) -> Free:
    """Return the quantity that "pK:phosphate:2" names."""
    kind, *rest = text.strip().split(":")
    wanted = {"total": 1, "pK": 2}.get(kind, 0)
    numbered = kind != "pK" or (len(rest) == 2 and rest[1].isascii() and rest[1].isdigit())
    if kind not in get_args(Kind) or len(rest) != wanted or not numbered:
        problem = f"{text.strip()!r} in --free is no quantity\naccepted: {FREE_WORDS}"
        raise CommandLineError(problem)
    step = int(rest[1]) - 1 if kind == "pK" else 0
    return Free(kind=kind, family=rest[0] if rest else "", step=step)  # type: ignore[arg-type]


LARGEST: Final = 5_000_000  # bytes
MOST_COMPLAINTS: Final = 50  # that are printed
EXAMPLE: Final = 'a reagent, with its strength if it is diluted: "sodium-hydroxide 0.1 mol/L"'
FREE_WORDS: Final = "strength, total:FAMILY, pK:FAMILY:STEP, offset, slope, such as pK:phosphate:2"
