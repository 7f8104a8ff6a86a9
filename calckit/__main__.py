"""`python -m calckit`: the same program as the `calckit` command."""

from calckit.cli import main

if __name__ == "__main__":
    raise SystemExit(main())
