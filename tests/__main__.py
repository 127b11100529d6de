"""The one command that checks everything: lint, format, strict types, tests. `python -m tests`."""

import subprocess
import sys
from pathlib import Path

ROOT = Path(__file__).resolve().parent.parent

COMMANDS = (
    ("ruff", "check", "."),
    ("ruff", "format", "--check", "."),
    ("mypy",),
    ("pytest",),
)


def main() -> int:
    """Run every check; the exit code is that of the first that fails, all of them run."""
    failed = 0
    for command in COMMANDS:
        print("+", *command, flush=True)
        code = subprocess.run([sys.executable, "-m", *command], cwd=ROOT, check=False).returncode
        failed = failed or code
    return failed


sys.exit(main())
