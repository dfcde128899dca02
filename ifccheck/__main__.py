"""``python -m ifccheck``."""

from ifccheck.cli import main

if __name__ == "__main__":
    main()
