"""`python -m surefoot.cli`: the console script where it is not on the path."""

import sys

from surefoot.cli.main import main

sys.exit(main())
