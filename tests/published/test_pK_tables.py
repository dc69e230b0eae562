"""pK over temperature, against published tables and equations."""

from collections.abc import Iterator

import numpy as np

from bufferfolio.definitions import PublishedEquation, ReferenceConstants
from bufferfolio.temperature import pK_at
from bufferfolio.water import pKw_at
from published_tables import Difference, Row, assert_within, differences, rows_of
from recipes import shipped


def shipped_pK(row: Row, celsius: float) -> float:
    step = shipped().families[row["family"]].steps[int(row["step"]) - 1]
    return float(pK_at(step, np.array(273.15 + celsius)))


# Measured tables that lie farther from the shipped constant than the rest, and why.
OTHERS = {
    # pK is that of another laboratory (Fickling et al., 9.994; here 9.97), and two decimals are
    # printed: 0.024 + 0.005. [0.0284]
    "phenol": 0.03,
    # pK is that of another work (Ernst & Menashi), which lies 0.03 below. [0.0317]
    "salicylate": 0.035,
    # pK is the row of 25 °C, which lies about 0.004 below the run of the others; so does that of
    # 35 °C. [0.0085]
    "diethanolamine": 0.01,
}
# Timimi & Everett lie 0.007 to 0.013 below Hetzer & Bates, whose pK is shipped. [0.0104, at 0 °C]
AMPD_OF_TWO_LABORATORIES = 0.013
# 6.796 lies 0.016 below the mean of the rows at 25 and 35 °C: the table is rough. [0.0137]
ROUGH_ROW, ROUGHNESS = ("ada", "30"), 0.016


def tolerance_of_table(item: Difference) -> float:
    row = item.row
    if (row["family"], row["celsius"]) == ROUGH_ROW:
        return ROUGHNESS
    if row["family"] == "ampd" and "Timimi & Everett" in row["source"]:
        return AMPD_OF_TWO_LABORATORIES
    return OTHERS.get(row["family"], 0.006 if float(row["celsius"]) <= 55.0 else 0.008)


def misses_of_tables() -> list[Difference]:
    return differences("pK_tables.csv", lambda row: shipped_pK(row, float(row["celsius"])))


def test_pK_agrees_with_published_tables_over_temperature() -> None:
    """Cell measurements and the like; some constants were fitted to such a table, none is one.

    Two laboratories differ by 0.006 for Tris at 25 °C and one of them reaches 60 °C, beyond what
    the heat capacity was fitted to. Largest misses of the rest today: 0.0056 to 55 °C (ADA at
    5 °C), 0.0072 at 60 °C (Tris).
    """
    assert_within(misses_of_tables(), tolerance_of_table)


def test_pK_runs_with_temperature_as_in_published_tables() -> None:
    """Less the mean miss of its table, each row: whose pK it starts from does not count.

    [0.0056, Tris at 60 °C; the rough row of ADA 0.012.]
    """
    tables: dict[tuple[str, ...], list[Difference]] = {}
    for item in misses_of_tables():
        of = tuple(item.row[name] for name in ("family", "step", "source"))
        tables.setdefault(of, []).append(item)
    assert len(tables) == 20
    for of, found in tables.items():
        mean = sum(item.miss for item in found) / len(found)
        for item in found:
            rough = (item.row["family"], item.row["celsius"]) == ROUGH_ROW
            assert abs(item.miss - mean) <= (ROUGHNESS if rough else 0.006), (of, item)


# Families that carry an equation, where the list of constants states another number at 25 °C.
STATED_BESIDE = {
    # The recommended value of a compilation; the family has the equation that it was weighed with.
    ("phosphate", "2"): 0.0015,  # [0.0014]
    ("ammonia", "1"): 0.001,  # [0.0008]
    # The paper's own value at 25 °C, which its equation misses by this.
    ("taps", "1"): 0.002,  # [0.0018]
    ("tapso", "1"): 0.0015,  # [0.0012]
}


def half_digit(text: str) -> float:
    return 0.5 * 10.0 ** -len(text.partition(".")[2])


def test_every_constant_of_the_list_is_shipped() -> None:
    """The pK at 298.15 K: the number itself, or what the family's equation gives, rounded."""
    at = np.array(298.15)

    def predict(row: Row) -> float:
        if row["family"] == "water":
            return float(pKw_at(at))
        family, step = shipped().families[row["family"]], int(row["step"])
        assert family.species[step - 1].charge == int(row["charge"]), row
        return float(pK_at(family.steps[step - 1], at))

    def tolerance(item: Difference) -> float:
        key = item.row["family"], item.row["step"]
        if key[0] != "water" and isinstance(law_of(*key), ReferenceConstants):
            return 1e-12
        return STATED_BESIDE.get(key, half_digit(item.row["value"]))

    found = differences("pK_298.csv", predict)
    assert_within(found, tolerance)
    listed = [(item.row["family"], item.row["step"]) for item in found]
    held = {
        (key, str(step + 1))
        for key, family in shipped().families.items()
        for step in range(len(family.steps))
    }
    assert len(listed) == len(set(listed)) == 110
    # TABS is known by its equation alone, which stands in the other table.
    assert held - set(listed) == {("tabs", "1")}
    assert set(listed) - held == {("water", "1")}


def law_of(family: str, step: str) -> ReferenceConstants | PublishedEquation:
    return shipped().families[family].steps[int(step) - 1].law


# Equations that a family carries itself: the numbers have to be the same.
OWN = {
    ("acetate", "Acetic acid"),
    ("lactate", "Lactic acid"),
    ("phthalate", "o-Phthalic acid, K1"),
    ("phthalate", "o-Phthalic acid, K2"),
    ("ammonia", "Ammonium ion, Bates & Pinching"),
    ("hypochlorite", "Hypochlorous acid"),
    ("borate", "Boric acid"),
    ("phosphate", "Phosphoric acid, K1"),
    ("phosphate", "Phosphoric acid, K2"),
    ("bis-tris", "Bis-tris"),
    ("carbonate", "Carbonic acid, K1, Plummer & Busenberg"),
    ("carbonate", "Carbonic acid, K2, Plummer & Busenberg"),
    ("propionate", "Propionic acid"),
    ("barbital", "Barbital"),
    ("fluoride", "Hydrofluoric acid"),
    ("sulfide", "Hydrogen sulfide, K1"),
    ("silicate", "Silicic acid, K1 (fresh-water limit)"),
    ("aces", "ACES, K2"),
    ("ches", "CHES, K2"),
    ("caps", "CAPS, K2"),
    ("capso", "CAPSO, K2"),
    ("hepps", "HEPPS, K2"),
    ("mopso", "MOPSO, K2"),
    ("tapso", "TAPSO, K2"),
    ("taps", "TAPS, K2"),
    ("popso", "POPSO, K2"),
    ("tabs", "TABS, K2"),
}
# Where sources disagree by more than the 0.01 that equations for one acid usually leave.
DISAGREEMENT = {
    # The fresh-water limit of a sea-water equation, with one constant enthalpy, 25 against
    # 16 kJ/mol. [0.130, at 45 °C]
    "Phosphoric acid, K3 (fresh-water limit)": 0.14,
    # The ion is strong, and its association with the salt blurs it: the enthalpies of the three
    # equations run from -16 to -24 kJ/mol. [0.055; 0.166, at 75 °C; 0.009]
    "Hydrogen sulfate ion, Pitzer et al.": 0.06,
    "Hydrogen sulfate ion, Marshall & Jones": 0.17,
    "Hydrogen sulfate ion, Dickson": 0.01,
    # Made for 25 to 175 °C; it lies 0.024 below the cell value at 25 °C. [0.032, at 60 °C]
    "Propionic acid (second source)": 0.035,
}


def allowed(row: Row) -> float:
    # The largest miss of the rest today is 0.0078 (succinic acid, K1, at 0 °C).
    return DISAGREEMENT.get(row["name"], 0.01)


def test_pK_at_25_degrees_agrees_with_published_equations() -> None:
    """The value that each equation is known by at 25 °C."""
    found = differences("pK_equations.csv", lambda row: shipped_pK(row, 25.0))
    assert_within(
        found,
        lambda item: (
            0.51e-4 if (item.row["family"], item.row["name"]) in OWN else allowed(item.row)
        ),
    )


def test_pK_agrees_with_published_equations_over_temperature() -> None:
    """Every five kelvin where both sides vouch for their constant."""
    own = set()
    for row in rows_of("pK_equations.csv"):
        key = row["family"], row["name"]
        limit = 1e-9 if key in OWN else allowed(row)
        own |= {key} & OWN
        temperatures = list(common_temperatures(row))
        assert len(temperatures) >= 5, row
        for celsius in temperatures:
            miss = shipped_pK(row, celsius) - published_pK(row, celsius)
            assert abs(miss) <= limit, (row["family"], row["name"], celsius, miss)
    assert own == OWN
    assert {family for family, _ in OWN} == {
        key
        for key, family in shipped().families.items()
        if any(isinstance(step.law, PublishedEquation) for step in family.steps)
    }


def common_temperatures(row: Row) -> Iterator[float]:
    valid = shipped().families[row["family"]].steps[int(row["step"]) - 1].valid_temperature
    for celsius in range(0, 101, 5):
        in_table = float(row["low"]) <= celsius <= float(row["high"])
        if in_table and valid.low - 1e-3 <= celsius + 273.15 <= valid.high + 1e-3:
            yield float(celsius)


def published_pK(row: Row, celsius: float) -> float:
    """Evaluate a published equation as it is printed."""
    t = 273.15 + celsius
    powers = {
        "constant": 1.0,
        "inverse": 1.0 / t,
        "linear": t,
        "logarithm": float(np.log(t)),
        "log10": float(np.log10(t)),
        "inverse_square": 1.0 / t**2,
    }
    value = sum(float(row[name]) * power for name, power in powers.items())
    return {"pK": value, "log10 K": -value, "ln K": -value / float(np.log(10.0))}[row["gives"]]
