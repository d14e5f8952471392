"""``python -m yieldnet``."""

from yieldnet.cli.main import main

if __name__ == "__main__":
    main()
