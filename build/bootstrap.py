"""The environment of the two commands: made once, remembered by a stamp, mended when broken.

Standard library only. `make_site.py` and `tests/run.py` use it before anything is installed.
"""

import hashlib
import importlib.util
import json
import os
import shutil
import subprocess
import sys
from collections.abc import Collection, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Final

ROOT: Final = Path(__file__).resolve().parents[1]
ENVIRONMENT: Final = ROOT / ".venv"
CHROMIUM_VARIABLE: Final = "BUFFERFOLIO_CHROMIUM"


class CannotGoOn(Exception):
    """Something on this machine is missing or broken; the message says what to do."""


@dataclass(frozen=True, slots=True)
class Stamp:
    """What a finished installation put into the environment."""

    root: str  # the project's folder: an installation in place breaks when it moves
    fingerprint: str
    extras: frozenset[str]

    def covers(self, extras: Collection[str]) -> bool:
        """Say whether that is what is wanted now."""
        here = self.root == str(ROOT) and self.fingerprint == fingerprint()
        return here and self.extras.issuperset(extras)


def run_in_environment(arguments: Sequence[str]) -> int:
    """Make the environment ready, run its Python with `arguments`; return the exit code."""
    try:
        python = prepare_environment(ENVIRONMENT, extra=None)
        return subprocess.run([str(python), *arguments], cwd=ROOT, env=clean_variables()).returncode
    except CannotGoOn as problem:
        print(problem, file=sys.stderr)
        return 1
    except KeyboardInterrupt:
        print("stopped", file=sys.stderr)
        return 130


def prepare_environment(environment: Path, extra: str | None) -> Path:
    """Return the Python of `environment`, with the project and its `extra` installed.

    Does nothing but look when the stamp agrees; makes or mends the environment otherwise. Raises
    CannotGoOn where that is impossible.
    """
    python = program(environment, "python")
    wanted = frozenset([extra] if extra else [])
    stamp = read_stamp(environment)
    if stamp and stamp.covers(wanted) and answers(python, "import bufferfolio"):
        return python
    moved = stamp is not None and stamp.root != str(ROOT)
    if moved or not answers(python, "import pip, sys; sys.exit(sys.version_info < (3, 11))"):
        make_environment(environment)
    extras = wanted | (stamp.extras if stamp else frozenset())
    install(environment, extras)
    if not answers(python, "import bufferfolio"):
        raise CannotGoOn(f"{environment} is broken; delete that folder and run this again")
    write_stamp(environment, extras)
    return python


def program(environment: Path, name: str) -> Path:
    """Return where `environment` keeps the program `name`."""
    if os.name == "nt":
        return environment / "Scripts" / f"{name}.exe"
    return environment / "bin" / name


def clean_variables() -> dict[str, str]:
    """Return this process's variables without those that lead another Python astray."""
    kept = {name: value for name, value in os.environ.items() if name not in MISLEADING}
    return {**kept, "PYTHONUTF8": "1"}


def answers(python: Path, code: str) -> bool:
    """Say whether `python` is there and runs `code` without complaint."""
    if not python.exists():
        return False
    try:
        asked = [str(python), "-c", code]
        return not subprocess.run(asked, env=clean_variables(), capture_output=True).returncode
    except OSError:
        return False


def make_environment(environment: Path) -> None:
    """Make an empty virtual environment, in place of whatever was there."""
    missing = [name for name in ("venv", "ensurepip") if not importlib.util.find_spec(name)]
    if missing:
        raise CannotGoOn(without_venv(missing))
    print(f"making {environment.name} with Python {sys.version.split()[0]}", flush=True)
    command = [sys.executable, "-m", "venv", "--clear", str(environment)]
    if subprocess.run(command, env=clean_variables()).returncode:
        raise CannotGoOn(
            f"could not make {environment}: the lines above say why.\n"
            "Is the disk full, or the folder open in another program or not yours to write?"
        )


def without_venv(missing: Sequence[str]) -> str:
    """Say what to install where this Python cannot make virtual environments."""
    version = ".".join(str(part) for part in sys.version_info[:2])
    remedy = f"Install a complete Python {version} or later (https://www.python.org/downloads/)"
    if shutil.which("apt-get"):
        remedy = f"Run: sudo apt-get install python{version}-venv"
    return (
        f"This Python ({sys.executable}) cannot make virtual environments: "
        f"it lacks {' and '.join(missing)}.\n{remedy}\nThen run the same command again."
    )


def install(environment: Path, extras: Collection[str]) -> None:
    """Install the project, in place, and what it needs."""
    # The stamp goes first and comes back last: an interrupted installation is seen as none.
    (environment / STAMP).unlink(missing_ok=True)
    project = f"{ROOT}[{','.join(sorted(extras))}]" if extras else str(ROOT)
    print("installing bufferfolio and what it needs (once; needs a connection)", flush=True)
    pip = [str(program(environment, "python")), "-m", "pip", "install", "--quiet", *PIP_OPTIONS]
    if subprocess.run([*pip, "--editable", project], env=clean_variables()).returncode:
        raise CannotGoOn(
            "pip could not install what bufferfolio needs: its lines above say why.\n"
            "The first run fetches packages from PyPI. Connect this machine, or behind a proxy\n"
            "set HTTPS_PROXY, or name a folder of wheels in PIP_FIND_LINKS. Then run this again;\n"
            "what was already fetched is kept."
        )


def fingerprint() -> str:
    """Return what an installation depends on, as one hash."""
    return hashlib.sha256((ROOT / "pyproject.toml").read_bytes()).hexdigest()


def read_stamp(environment: Path) -> Stamp | None:
    """Return what the last finished installation wrote; None where there was none."""
    try:
        written = json.loads((environment / STAMP).read_text(encoding="utf-8"))
        return Stamp(written["root"], written["fingerprint"], frozenset(written["extras"]))
    except (OSError, ValueError, KeyError, TypeError):
        return None


def write_stamp(environment: Path, extras: Collection[str]) -> None:
    """Remember what is installed, in one step."""
    stamp = {"root": str(ROOT), "fingerprint": fingerprint(), "extras": sorted(extras)}
    unfinished = environment / f"{STAMP}.new"
    unfinished.write_text(json.dumps(stamp, indent=1), encoding="utf-8")
    unfinished.replace(environment / STAMP)


def find_chromium() -> Path | None:
    """Return a browser of the Chromium kind: the one named by the variable, or one found."""
    named = os.environ.get(CHROMIUM_VARIABLE)
    if named:
        found = shutil.which(named)
        return Path(found) if found else None
    on_path = (shutil.which(name) for name in CHROMIUM_NAMES)
    usual = (Path(os.path.expandvars(place)).expanduser() for place in CHROMIUM_PLACES)
    candidates = [*(Path(found) for found in on_path if found), *usual]
    return next((candidate for candidate in candidates if candidate.is_file()), None)


STAMP: Final = "bufferfolio-stamp.json"

MISLEADING: Final = frozenset({"PYTHONHOME", "PYTHONPATH", "PYTHONSTARTUP", "__PYVENV_LAUNCHER__"})

PIP_OPTIONS: Final = ("--disable-pip-version-check", "--no-input", "--retries", "2")

CHROMIUM_NAMES: Final = (
    "chromium",
    "chromium-browser",
    "google-chrome",
    "google-chrome-stable",
    "chrome",
    "microsoft-edge",
    "msedge",
)

CHROMIUM_PLACES: Final = (
    "/Applications/Chromium.app/Contents/MacOS/Chromium",
    "/Applications/Google Chrome.app/Contents/MacOS/Google Chrome",
    "/Applications/Microsoft Edge.app/Contents/MacOS/Microsoft Edge",
    "~/Applications/Chromium.app/Contents/MacOS/Chromium",
    "~/Applications/Google Chrome.app/Contents/MacOS/Google Chrome",
    r"${ProgramFiles}\Google\Chrome\Application\chrome.exe",
    r"${ProgramFiles(x86)}\Google\Chrome\Application\chrome.exe",
    r"${LocalAppData}\Google\Chrome\Application\chrome.exe",
    r"${LocalAppData}\Chromium\Application\chrome.exe",
    r"${ProgramFiles(x86)}\Microsoft\Edge\Application\msedge.exe",
    r"${ProgramFiles}\Microsoft\Edge\Application\msedge.exe",
)
