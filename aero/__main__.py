"""`python -m aero`."""

from aero.cli import main

if __name__ == "__main__":
    main()
