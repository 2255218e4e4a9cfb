"""``python -m pathcalc``: the same as the command ``pathcalc``."""

from pathcalc.cli import main

if __name__ == "__main__":
    main()
