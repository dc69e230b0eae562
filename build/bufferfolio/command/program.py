"""From the words of the command line to an exit code; whatever goes wrong is said in a sentence."""

import os
import sys
from collections.abc import Callable, Mapping, Sequence
from typing import Final

from bufferfolio.command import building, checking, console, drafting, predicting
from bufferfolio.command.arguments import Arguments, CommandLineError, ExitCode, parse
from bufferfolio.errors import BufferfolioError


def main(words: Sequence[str] | None = None) -> int:
    """Run the command with `words` (the command line, where None) and return its exit code."""
    console.speak_utf8()
    try:
        arguments = parse(sys.argv[1:] if words is None else words)
        code = ACTIONS[arguments.action](arguments)
        sys.stdout.flush()
        return code
    except CommandLineError as problem:
        return _complain(f"bufferfolio: {problem}", ExitCode.WRONG_COMMAND_LINE)
    except BufferfolioError as problem:
        return _complain(str(problem), ExitCode.WRONG_INPUT)
    except KeyboardInterrupt:
        return _complain("stopped", ExitCode.STOPPED)
    except BrokenPipeError:
        # Whoever read the output has left; nothing may be written at the exit either.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return ExitCode.WRONG_INPUT
    except OSError as problem:
        about = f"{problem.filename}: " if problem.filename else ""
        return _complain(f"{about}{problem.strerror or problem}", ExitCode.WRONG_INPUT)


def _complain(message: str, code: ExitCode) -> ExitCode:
    print(message, file=sys.stderr)
    return code


ACTIONS: Final[Mapping[str, Callable[[Arguments], ExitCode]]] = {
    "check": checking.check,
    "build": building.build,
    "predict": predicting.predict,
    "new": drafting.new,
}
