"""`python -m starkiln` is the console command."""

import sys

from starkiln.cli import main

if __name__ == "__main__":
    sys.exit(main())
