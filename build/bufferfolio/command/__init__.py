"""The command `bufferfolio`: arguments, progress, exit codes; no science.

`program` is the whole of it, one module an action; only here are files read and words printed.
"""

from bufferfolio.command.program import main

__all__ = ["main"]
