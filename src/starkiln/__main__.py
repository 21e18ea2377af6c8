"""`python -m starkiln` is the console command."""

import sys

from starkiln.cli import console

if __name__ == "__main__":
    sys.exit(console())
