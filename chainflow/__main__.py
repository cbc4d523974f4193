"""Run the command line with ``python -m chainflow``."""

from chainflow.cli import main

main()
