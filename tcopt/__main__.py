"""``python -m tcopt``."""

from tcopt.cli import main

if __name__ == "__main__":
    main()
