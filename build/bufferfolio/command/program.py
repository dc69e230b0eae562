"""From the words of the command line to an exit code; whatever goes wrong is said in a sentence."""

import os
import sys
from collections.abc import Callable, Mapping, Sequence
from typing import Final

from bufferfolio.command import (
    building,
    checking,
    console,
    drafting,
    evidencing,
    fitting,
    predicting,
)
from bufferfolio.command.arguments import Arguments, CommandLineError, ExitCode, parse
from bufferfolio.errors import BufferfolioError


def main(words: Sequence[str] | None = None) -> int:
    """Run the command with `words` (the command line, where None) and return its exit code."""
    console.speak_utf8()
    try:
        code, message = _outcome(sys.argv[1:] if words is None else words)
        sys.stdout.flush()  # what was found comes before what is wrong with it
    except BrokenPipeError:
        # Whoever read the output has left; nothing may be written at the exit either.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return ExitCode.WRONG_INPUT
    if message:
        print(message, file=sys.stderr)
    return code


def _outcome(words: Sequence[str]) -> tuple[ExitCode, str]:
    """Return the exit code, and what is to be said about it."""
    try:
        arguments = parse(words)
        return ACTIONS[arguments.action](arguments), ""
    except CommandLineError as problem:
        return ExitCode.WRONG_COMMAND_LINE, f"bufferfolio: {problem}"
    except BufferfolioError as problem:
        return ExitCode.WRONG_INPUT, str(problem)
    except KeyboardInterrupt:
        return ExitCode.STOPPED, "stopped"
    except BrokenPipeError:
        raise
    except OSError as problem:
        about = f"{problem.filename}: " if problem.filename else ""
        return ExitCode.WRONG_INPUT, f"{about}{problem.strerror or problem}"


ACTIONS: Final[Mapping[str, Callable[[Arguments], ExitCode]]] = {
    "check": checking.check,
    "build": building.build,
    "predict": predicting.predict,
    "fit": fitting.fit_data,
    "evidence": evidencing.evidence,
    "new": drafting.new,
}
