"""Makes ``python -m enclosure_check`` the command line."""

from enclosure_check.cli import run

run()
