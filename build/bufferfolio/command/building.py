"""`bufferfolio build`: the site, and a table of what was computed for it."""

from bufferfolio.command.arguments import Arguments, ExitCode


def build(arguments: Arguments) -> ExitCode:
    return ExitCode.DONE
