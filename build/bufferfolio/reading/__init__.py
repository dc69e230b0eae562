"""YAML to definitions: the accepted units, the shape of each file, and every complaint about one.

`read_library` reads a folder, `read_evidence` its published tables, `read_formulation` one file
more. All raise DefinitionErrors, which carries everything that is wrong, at its place;
`bufferfolio.errors.render` words one of them.
"""

from bufferfolio.reading.evidence import read_evidence
from bufferfolio.reading.library import read_formulation, read_library

__all__ = ["read_evidence", "read_formulation", "read_library"]
