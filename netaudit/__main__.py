"""``python -m netaudit``."""

from netaudit.cli.main import run

if __name__ == "__main__":
    run()
