"""Let `python -m retrofit` do what the command does."""

from retrofit.cli import main

main()
