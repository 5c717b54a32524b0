"""Start-up of whole processes as ratios to `python -c pass` of the same run.

python tests/benchmarks/startup.py [rounds]
"""

from __future__ import annotations

import subprocess
import sys
import tempfile
import time
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
SIX_PARTS = ROOT / "examples" / "exceeded" / "wireless-link.toml"
LIBRARIES = "import numpy, pydantic, pint; pint.UnitRegistry(); type('M', (pydantic.BaseModel,), {})"


def best(arguments: list[str], rounds: int) -> float:
    """Shortest of several runs [s]."""
    times = []
    for _ in range(rounds):
        start = time.perf_counter()
        subprocess.run([sys.executable, *arguments], stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL, check=False)
        times.append(time.perf_counter() - start)
    return min(times)


def main(rounds: int) -> None:
    """Print the table."""
    with tempfile.TemporaryDirectory() as folder:
        fixed = Path(folder) / "fixed.toml"
        fixed.write_text(without_tolerances(SIX_PARTS.read_text(encoding="utf-8")), encoding="utf-8")
        runs = {
            "python -c pass": ["-c", "pass"],
            "--version": ["-m", "stresscheck", "--version"],
            "--help": ["-m", "stresscheck", "--help"],
            "import numpy, pydantic, pint's registry": ["-c", LIBRARIES],
            "review, six parts, nothing varies": ["-m", "stresscheck", "review", str(fixed), "--state", "normal"],
            "review, six parts with tolerances, one state": [
                "-m", "stresscheck", "review", str(SIX_PARTS), "--state", "normal",
            ],
            "review, six parts, two states": ["-m", "stresscheck", "review", str(SIX_PARTS)],
        }  # fmt: skip
        base = best(runs["python -c pass"], rounds)
        for name, arguments in runs.items():
            print(f"  {name:45} {best(arguments, rounds) / base:6.1f} x pass")


def without_tolerances(text: str) -> str:
    """The same design with nothing to vary."""
    lines = [line for line in text.splitlines() if not line.startswith("tolerance")]
    return "\n".join(lines).replace("factor = [0.15, 0.30]", "factor = 0.2")


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 7)
