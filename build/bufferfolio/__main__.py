"""`python -m bufferfolio` does what the command `bufferfolio` does."""

import sys

from bufferfolio.command import main

if __name__ == "__main__":
    sys.exit(main())
