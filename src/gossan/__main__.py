"""`python -m gossan`, the same as the command `gossan`."""

import sys

from gossan.cli.main import main

if __name__ == "__main__":
    sys.exit(main())
