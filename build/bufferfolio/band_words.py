"""What a band is made of, in words."""

from collections.abc import Mapping
from typing import Final

from bufferfolio.uncertainty import Contribution


def contribution_words(item: Contribution) -> str:
    """Return what one contribution comes from: pK 2 of phosphoric acid."""
    return WORDS[item.kind].format(name=item.name, step=item.step)


WORDS: Final[Mapping[str, str]] = {
    "constant": "pK {step} of {name}",
    "water": "ionisation of water, pKw",
    "activity": "activity model",
    "weighing": "amount of {name}",
    "content": "content of {name}, as bought",
    "make-up": "amount of water, or volume made up to",
    "temperature": "thermometer",
    "meter": "meter",
    "model": "what is not modelled here",
}
