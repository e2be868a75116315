"""`python -m edgetally`."""

from edgetally.cli import main

if __name__ == "__main__":
    main()
