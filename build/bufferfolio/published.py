"""What a published table says, as frozen records: numbers that predictions are compared with.

Nothing is ever computed from them. Units are fixed as in `definitions`, but for the amounts of a
mixture: those stay per kilogram of water or per litre, as the table's source has them.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Final, Literal

from bufferfolio.definitions import Citation, Ion
from bufferfolio.errors import Place

Quantity = Literal[
    "pH",
    "pH after titrant",
    "buffer value",
    "dilution value",
    "temperature coefficient",
    "mean activity coefficient",
    "ion activity coefficient",
    "share",
    "percent",
    "-log10 share",
    "CO2 over alkalinity",
    "density",
    "permittivity",
    "Debye-Hückel coefficient",
    "pKw",
]
Scale = Literal["activity", "older", "not stated", "concentration", "none"]

OWN: Final = "own"  # key of the family that a source's own constants make up


@dataclass(frozen=True, slots=True, kw_only=True)
class Solution:
    """What a published mixture holds, in mol per kg of water or per litre as its table says."""

    stated: str  # "KH2PO4=0.025; Na2HPO4=0.025"
    families: Mapping[str, float]  # by key; "own" is the family of the source's own constants
    ions: Mapping[Ion, float]


@dataclass(frozen=True, slots=True, kw_only=True)
class PublishedValue:
    """One number of a published table, and what it holds for; None: not a matter of this table."""

    part: str  # key of a part of the table; "" where it has none
    solution: Solution | None
    volume: float | None  # m3 of the solution
    titrant: Solution | None
    added: float | None  # m3 of the titrant
    pK: tuple[float, ...]  # the source's own constants; empty: the library's
    form: tuple[str, int] | None  # family and how many protons its form has lost
    charge: int | None
    ionic_strength: float | None  # mol/kg
    temperature: float  # K
    pH: float | None  # where a share holds
    value: float
    doubtful: str | None  # why the number is doubtful as printed
    note: str | None
    citation: Citation
    place: Place


@dataclass(frozen=True, slots=True, kw_only=True)
class TablePart:
    """Some rows of a published table that belong together: one solution, one salt."""

    key: str
    title: str
    cause: str | None  # of its misfit, as far as known


@dataclass(frozen=True, slots=True, kw_only=True)
class Target:
    """How close predictions ought to come to a table."""

    root_mean_square: float
    largest: float | None


@dataclass(frozen=True, slots=True, kw_only=True)
class TableGroup:
    """Published tables of one kind."""

    key: str
    title: str
    about: str


@dataclass(frozen=True, slots=True, kw_only=True)
class PublishedTable:
    """Numbers from the literature that predictions are compared with, never made from."""

    key: str  # file name without ending: primary-standards
    group: TableGroup
    title: str
    quantity: Quantity
    amounts: Literal["mol/kg", "mol/L"]
    compared_by: Literal["difference", "ratio"]
    scale: Scale
    uncertainty: str  # as the source states it, in words
    causes: tuple[str, ...]  # of its misfit, as far as known
    parts: tuple[TablePart, ...]
    target: Target | None
    pKw: float | None  # the source's own; None: the library's
    rows: tuple[PublishedValue, ...]
    place: Place
