"""Run the shell with ``python -m tenkpc``."""

from tenkpc.cli import main

main()
