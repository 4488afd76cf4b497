"""``python -m evenfire`` is the command ``evenfire``."""

from evenfire.cli.main import main

main()
