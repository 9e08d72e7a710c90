"""Run the command line with ``python -m doubler``."""

import sys

from doubler.cli import main

sys.exit(main())
