"""`python -m stresscheck`."""

from stresscheck.cli import run

if __name__ == "__main__":
    run()
