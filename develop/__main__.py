"""`python -m develop`."""

from develop.cli.main import run

if __name__ == "__main__":
    run()
