"""`python -m app`: the same as the command `feedwright`."""

import sys

from app.cli import main

sys.exit(main())
