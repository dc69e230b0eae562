"""The page's engine against Python: random systems, every shipped formulation, every figure.

Both solve the same equations to the last few bits, so that the limits here (1e-9) are those of the
design and not of what agrees today: over the random systems pH differs by 3e-14 at most, capacity
by 2e-14 and a fraction by 3e-13 of itself.
"""

from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import Final

import numpy as np
import pytest

from bufferfolio.activity import MODELS
from bufferfolio.buffering import buffer_capacity
from bufferfolio.definitions import Ion, Library
from bufferfolio.engine_data import explorer_data, family_data, sheet_data
from bufferfolio.equilibrium import Status, solve
from bufferfolio.explorations import exploration_of
from bufferfolio.explorer_plots import EXPLORER_FIGURES
from bufferfolio.figures import Figure, as_data
from bufferfolio.plots import SHEET_FIGURES
from bufferfolio.reading import read_library
from bufferfolio.sheets import sheet_of
from bufferfolio.speciation import Mixture, forms_at
from bufferfolio.subjects import state_at, subject_of
from bufferfolio.svg_figures import svg
from bufferfolio.temperature import constants_at
from bufferfolio.water import FloatArray

from .conftest import Visitor

DRAWS: Final = 200  # of families, ions and a model
SYSTEMS: Final = 10  # of each
LIMIT: Final = 1e-9
TINIEST: Final = 1e-290  # below it floating point itself has fewer digits

IONS: Final = (  # none of them a form of a family
    Ion(name="Na+", charge=1),
    Ion(name="K+", charge=1),
    Ion(name="Mg+2", charge=2),
    Ion(name="Cl-", charge=-1),
    Ion(name="NO3-", charge=-1),
    Ion(name="S2O3-2", charge=-2),
)

SOLVE: Final = """
  (draws) => draws.map(({ model, interactions, families, ions, systems }) => {
    const bf = bufferfolio;
    const law = bf.activity.MODELS[model];
    return systems.map(({ temperature, totals, molalities }) => {
      const mixture = { families, totals, ions, molalities };
      const constants = bf.temperature.constantsAt(families, temperature);
      const found = bf.equilibrium.solve(mixture, constants, law, interactions);
      const { pH, ionic_strength, status, offsets } = found;
      const forms = bf.speciation.formsAt(mixture, constants, law, pH, ionic_strength, offsets);
      return {
        pH, ionic_strength, status,
        capacity: bf.buffering.bufferCapacity(mixture, constants, law, found),
        fractions: forms.fractions.map((each) => Array.from(each)),
      };
    });
  })
"""

STATES: Final = """
  ([data, cases]) => cases.map(([temperature, strength]) => {
    const subject = bufferfolio.subjects.subjectOf(data.subject);
    const found = bufferfolio.subjects.stateAt(subject, temperature, strength);
    const { pH, ionic_strength, status, capacity, forms } = found;
    const fractions = forms.fractions.map((each) => Array.from(each));
    return { pH, ionic_strength, status, capacity, fractions };
  })
"""

DRAW: Final = """
  (data) => {
    const bf = bufferfolio;
    const [makers, results] = data.kind === "sheet"
      ? [bf.plots.SHEET_FIGURES,
         bf.sheets.sheetOf(bf.subjects.subjectOf(data.subject), data.temperature)]
      : [bf.explorer_plots.EXPLORER_FIGURES,
         bf.explorations.explorationOf(
           data.family, data.temperature, data.total, data.ionic_strength)];
    const drawn = {};
    for (const [key, make] of Object.entries(makers)) {
      const figure = make(results);
      if (figure === null) continue;
      drawn[key] = [JSON.parse(JSON.stringify(figure)), bf.svg_figures.svg(figure)];
    }
    return drawn;
  }
"""


@pytest.fixture(scope="module")
def library(systems: Path) -> Library:
    return read_library(systems)


@pytest.fixture
def engine(visitor: Visitor) -> Visitor:
    """Return a visitor of a page that has the whole engine."""
    visitor.open("formulations/tris-assay.html")
    return visitor


@dataclass(frozen=True, slots=True, kw_only=True)
class Draw:
    """Random systems of the same families, ions and model, one a column."""

    mixture: Mixture
    temperature: FloatArray
    model: str


def random_draws(library: Library) -> Iterator[Draw]:
    """Yield systems over the whole range of the design."""
    random = np.random.default_rng(20_250_301)
    families = sorted(library.families.values(), key=lambda family: family.key)
    for number in range(DRAWS):
        some = random.choice(len(families), size=random.integers(0, 5), replace=False)
        ions = tuple(ion for ion in IONS if random.random() < 0.5)
        yield Draw(
            mixture=Mixture(
                families=tuple(families[at] for at in some),
                totals=10.0 ** random.uniform(-9.0, np.log10(2.0), (len(some), SYSTEMS)),
                ions=ions,
                molalities=10.0 ** random.uniform(-9.0, np.log10(3.0), (len(ions), SYSTEMS)),
            ),
            temperature=273.15 + random.uniform(-5.0, 100.0, SYSTEMS),
            model=tuple(MODELS)[number % len(MODELS)],
        )


def draw_data(library: Library, draw: Draw) -> dict[str, object]:
    mixture = draw.mixture
    return {
        "model": draw.model,
        "interactions": [
            {"cation": pair.cation, "anion": pair.anion, "epsilon": pair.epsilon}
            for pair in library.interactions
        ],
        "families": [family_data(family) for family in mixture.families],
        "ions": [{"name": ion.name, "charge": ion.charge} for ion in mixture.ions],
        "systems": [
            {
                "temperature": float(draw.temperature[column]),
                "totals": mixture.totals[:, column].tolist(),
                "molalities": mixture.molalities[:, column].tolist(),
            }
            for column in range(SYSTEMS)
        ],
    }


def assert_same(found: dict[str, object], expected: dict[str, object], about: str) -> None:
    """Hold a state of the page against Python's."""
    assert found["status"] == expected["status"], about
    if expected["status"] == Status.NO_SOLUTION:
        return
    assert abs(found["pH"] - expected["pH"]) < LIMIT, about
    for name in ("ionic_strength", "capacity"):
        np.testing.assert_allclose(found[name], expected[name], rtol=LIMIT, err_msg=about)
    for ours, theirs in zip(found["fractions"], expected["fractions"], strict=True):
        np.testing.assert_allclose(ours, theirs, rtol=LIMIT, atol=TINIEST, err_msg=about)


def test_random_systems_have_the_same_solution(engine: Visitor, library: Library) -> None:
    """2,000 mixtures of up to four families and six strong ions, from 1e-9 mol/kg up."""
    assert DRAWS * SYSTEMS >= 2000
    draws = list(random_draws(library))
    answers = engine.page.evaluate(SOLVE, [draw_data(library, draw) for draw in draws])
    statuses: set[int] = set()
    for draw, answer in zip(draws, answers, strict=True):
        mixture, law = draw.mixture, MODELS[draw.model]
        constants = constants_at(mixture.families, draw.temperature)
        here = solve(mixture, constants, law, library.interactions)
        capacity = buffer_capacity(mixture, constants, law, here)
        forms = forms_at(mixture, constants, law, here.pH, here.ionic_strength, here.offsets)
        names = [family.key for family in mixture.families]
        for column, found in enumerate(answer):
            expected = {
                "pH": float(here.pH[column]),
                "ionic_strength": float(here.ionic_strength[column]),
                "status": int(here.status[column]),
                "capacity": float(capacity[column]),
                "fractions": [shares[:, column].tolist() for shares in forms.fractions],
            }
            statuses.add(expected["status"])
            assert_same(found, expected, f"{names} {draw.model}, {column}")
    assert {Status.SOLVED, Status.OUT_OF_RANGE, Status.BEYOND_MODEL} <= statuses


def test_every_formulation_has_the_same_states(engine: Visitor, library: Library) -> None:
    """Over its temperatures of use, from a tenth of the recipe's strength to twice it."""
    assert len(library.formulations) >= 10
    for key, formulation in library.formulations.items():
        subject = subject_of(formulation, library)
        use = formulation.use_temperature
        cases = [
            (float(kelvin), strength)
            for kelvin in np.linspace(use.low, use.high, 5)
            for strength in (0.1, 0.5, 1.0, 2.0)
        ]
        data = sheet_data(sheet_of(formulation, library))
        found = engine.page.evaluate(STATES, [data, cases])
        for (kelvin, strength), there in zip(cases, found, strict=True):
            here = state_at(subject, kelvin, strength)
            expected = {
                "pH": here.pH,
                "ionic_strength": here.ionic_strength,
                "status": int(here.status),
                "capacity": here.capacity,
                "fractions": [shares.tolist() for shares in here.forms.fractions],
            }
            assert_same(there, expected, f"{key} at {kelvin} K, {strength} times")


def test_every_figure_of_a_sheet_is_the_same_picture(engine: Visitor, library: Library) -> None:
    for key, formulation in library.formulations.items():
        sheet = sheet_of(formulation, library)
        made = {name: make(sheet) for name, make in SHEET_FIGURES.items()}
        assert_same_pictures(engine, key, sheet_data(sheet), made)


def test_every_figure_of_an_explorer_is_the_same_picture(engine: Visitor, library: Library) -> None:
    for key, family in library.families.items():
        exploration = exploration_of(family)
        made = {name: make(exploration) for name, make in EXPLORER_FIGURES.items()}
        assert_same_pictures(engine, key, explorer_data(exploration), made)


def assert_same_pictures(
    engine: Visitor, key: str, data: dict[str, object], made: dict[str, Figure | None]
) -> None:
    """Same words, same numbers to their six digits, same characters of SVG."""
    drawn = engine.page.evaluate(DRAW, data)
    expected = {name: figure for name, figure in made.items() if figure is not None}
    assert list(drawn) == list(expected), key
    for name, figure in expected.items():
        found, picture = drawn[name]
        assert_same_data(found, as_data(figure), f"{key}: {name}")
        assert picture == svg(figure), f"{key}: {name}"


def assert_same_data(found: object, expected: object, where: str) -> None:
    """Numbers may differ by one in the sixth digit, where rounding tips; nothing else may."""
    if isinstance(expected, dict):
        assert isinstance(found, dict), where
        assert found.keys() == expected.keys(), where
        for name, value in expected.items():
            assert_same_data(found[name], value, f"{where}.{name}")
    elif isinstance(expected, list):
        assert isinstance(found, list), where
        assert len(found) == len(expected), where
        for place, value in enumerate(expected):
            assert_same_data(found[place], value, f"{where}[{place}]")
    elif isinstance(expected, float):
        assert found == pytest.approx(expected, rel=1.01e-5, abs=1e-12), where
    else:
        assert found == expected, where
