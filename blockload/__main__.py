"""`python -m blockload` is the command `blockload`."""

from .cli import main

main()
