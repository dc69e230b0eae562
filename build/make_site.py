#!/usr/bin/env python3
"""Build the site: `python3 build/make_site.py`. Needs Python 3.11 or later and nothing else.

Makes .venv in the project's folder, installs the project into it and runs `bufferfolio build`
there; options go on to that command (`python3 build/make_site.py --strict`). Relative paths count
from the project's folder.
"""

import sys

# Older Pythons 3 have to understand this file, to be told which one is needed.
if sys.version_info < (3, 11):  # noqa: UP036 - it is the message for those who have less
    sys.exit(
        "bufferfolio needs Python 3.11 or later; this is Python %d.%d.\n"
        "Install a later one (https://www.python.org/downloads/), then run:\n"
        "    python3.11 build/make_site.py" % sys.version_info[:2]
    )

import bootstrap

if __name__ == "__main__":
    sys.exit(bootstrap.run_in_environment(["-m", "bufferfolio", "build", *sys.argv[1:]]))
