"""Makes ``python -m enclosure_check`` the command line."""

import sys

from enclosure_check.cli import main

sys.exit(main())
