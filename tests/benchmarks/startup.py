"""Start-up of whole processes as ratios to `python -c pass` of the same run.

python tests/benchmarks/startup.py [rounds]

The runs take turns, so that a slow minute of the machine meets all of them. Compiled modules are kept in a folder of
the benchmark's own and are there before the first measured run, as they are for whoever installed the package: some
environments forbid Python to write them, and then every start would compile the package anew.
"""

from __future__ import annotations

import os
import subprocess
import sys
import tempfile
import time
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
SIX_PARTS = ROOT / "examples" / "exceeded" / "wireless-link.toml"
LIBRARIES = "import numpy, pydantic, pint; pint.UnitRegistry(); type('M', (pydantic.BaseModel,), {})"
PASS = "python -c pass"
AIMS = {"--version": 3.0, "--help": 9.0, "review --help": 9.0, "review, nothing varies": 30.0}


def seconds(arguments: list[str], code: int, environment: dict[str, str]) -> float:
    """How long one process takes; one that ends with another exit code measured something else."""
    start = time.perf_counter()
    done = subprocess.run(
        [sys.executable, *arguments], env=environment, stdout=subprocess.DEVNULL, stderr=subprocess.PIPE, check=False
    )
    took = time.perf_counter() - start
    if done.returncode != code:
        raise RuntimeError(f"{arguments} ended with {done.returncode}, not {code}: {done.stderr.decode()[-500:]}")
    return took


def main(rounds: int) -> None:
    """Print the table: shortest of several runs each, as a ratio."""
    with tempfile.TemporaryDirectory() as folder:
        fixed = Path(folder) / "fixed.toml"
        fixed.write_text(without_tolerances(SIX_PARTS.read_text(encoding="utf-8")), encoding="utf-8")
        environment = {k: v for k, v in os.environ.items() if k != "PYTHONDONTWRITEBYTECODE"}
        environment["PYTHONPYCACHEPREFIX"] = str(Path(folder) / "compiled")
        review = ["-m", "stresscheck", "review"]
        runs = {
            PASS: (["-c", "pass"], 0),
            "--version": (["-m", "stresscheck", "--version"], 0),
            "--help": (["-m", "stresscheck", "--help"], 0),
            "review --help": ([*review, "--help"], 0),
            "import numpy, pydantic, pint's registry": (["-c", LIBRARIES], 0),
            "review, nothing varies": ([*review, str(fixed), "--state", "normal"], 0),
            "review, tolerances, one state": ([*review, str(SIX_PARTS), "--state", "normal"], 0),
            "review, tolerances, two states": ([*review, str(SIX_PARTS)], 1),
        }
        best = {name: seconds(*run, environment) for name, run in runs.items()}  # compiles; the rounds are faster
        for _ in range(rounds):
            for name, run in runs.items():
                best[name] = min(best[name], seconds(*run, environment))
    print(f"shortest of {rounds} runs; the design has six parts; aims in brackets")
    for name, took in best.items():
        aim = f"  [{AIMS[name]:g}]" if name in AIMS else ""
        print(f"  {name:42} {1e3 * took:7.0f} ms {took / best[PASS]:6.1f} x pass{aim}")


def without_tolerances(text: str) -> str:
    """The same design with nothing to vary."""
    lines = [line for line in text.splitlines() if not line.startswith("tolerance")]
    return "\n".join(lines).replace("factor = [0.15, 0.30]", "factor = 0.2")


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 7)
