"""What a sheet's page needs beside the formulation to judge, correct, make and find faults."""

import math
from collections.abc import Sequence
from dataclasses import replace

from bufferfolio.definitions import Library
from bufferfolio.dose_tables import dose_rows
from bufferfolio.engine_data import Data, part_data, setting_data
from bufferfolio.measurements import target_at
from bufferfolio.recipes import Part
from bufferfolio.routes import Route, routes_of
from bufferfolio.shelves import shelf_of
from bufferfolio.subjects import Subject, reference_temperature
from bufferfolio.substitutes import Setting, setting_of
from bufferfolio.suspects import scene_of
from bufferfolio.uncertainty import band_of


def field_data(subject: Subject, library: Library, routes: Sequence[Route] | None = None) -> Data:
    """Return what goes into the page's data block under `field`; `routes` if they are at hand."""
    setting = setting_of(subject, library)
    return {
        "setting": setting_data(setting),
        "routes": routes_data(ways_to(subject, library) if routes is None else routes),
        "checks": field_checks(setting),
    }


def ways_to(subject: Subject, library: Library) -> tuple[Route, ...]:
    """Return the ways to make a formulation from what the library has on its shelf."""
    kelvin = reference_temperature(subject.formulation)
    return routes_of(subject, shelf_of(subject, library), kelvin)


def routes_data(routes: Sequence[Route]) -> Data:
    """Return ways to make a formulation: each reagent once, and the ways by its position."""
    bottles: dict[str, Part] = {}
    for route in routes:
        for part in (*route.recipe.parts, *(each for one in route.instead for each in one)):
            bottles.setdefault(part.key, replace(part, amount=1.0))
    positions = {key: at for at, key in enumerate(bottles)}
    return {
        "bottles": [part_data(part) for part in bottles.values()],
        "ways": [
            {
                "kind": route.kind,
                "parts": [[positions[part.key], part.amount] for part in route.recipe.parts],
                "instead": [[positions[each.key] for each in one] for one in route.instead],
                "water": route.recipe.water,
                "differences": [list(pair) for pair in route.differences],
            }
            for route in routes
        ],
    }


def field_checks(setting: Setting) -> Data:
    """Return what the page's engine must reproduce before it may answer in the field."""
    subject = setting.subject
    use = subject.formulation.use_temperature
    kelvin = reference_temperature(subject.formulation)
    read = target_at(subject, kelvin) + READ_OFF
    (dose,) = dose_rows(subject, kelvin, [read])
    in_air = scene_of(setting, kelvin).in_air
    return {
        "bands": [
            {"temperature": band.temperature, "pH": band.pH, "half_width": band.half_width}
            for band in (band_of(subject, each) for each in (use.low, kelvin, use.high))
        ],
        "dose": {
            "temperature": kelvin,
            "pH": read,
            "refusal": dose.refusal,
            "titrant": dose.titrant,
            "moles": None if dose.refusal else dose.moles,
        },
        "air": {"temperature": kelvin, "total": None if math.isnan(in_air) else in_air},
    }


READ_OFF = 0.07  # in pH; how far off the reading of the checks is
