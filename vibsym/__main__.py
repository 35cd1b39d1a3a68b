"""`python -m vibsym` is the command `vibsym`."""

from vibsym.cli.main import main

if __name__ == "__main__":
    main()
