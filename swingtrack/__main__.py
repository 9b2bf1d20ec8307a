"""`python -m swingtrack` does what the installed program does."""

from .cli import main

if __name__ == "__main__":
    main()
