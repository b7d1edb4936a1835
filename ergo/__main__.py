"""`python -m ergo` is `pullward`."""

import sys

from ergo.cli.main import main

sys.exit(main())
