"""`python -m headrace` is the command `headrace`."""

from headrace.outputs.cli.main import run

if __name__ == "__main__":
    run()
