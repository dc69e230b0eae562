"""Where templates and library stand: in the package, or at the project's top level."""

from pathlib import Path

from bufferfolio.errors import BufferfolioError


def templates() -> Path:
    """Return the folder of page templates, style sheets and page scripts."""
    return _folder("site_templates")


def systems() -> Path:
    """Return the folder of families, reagents, sources and formulations that the project ships."""
    return _folder("systems")


def _folder(name: str) -> Path:
    # An installed wheel carries the folder inside the package; a checkout, installed in place, has
    # it two levels up, beside build/.
    package = Path(__file__).resolve().parent
    for candidate in (package / name, package.parents[1] / name):
        if candidate.is_dir():
            return candidate
    raise BufferfolioError(
        f"the installation is incomplete: it has no folder {name}; install again"
    )
