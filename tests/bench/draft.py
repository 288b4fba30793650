"""How long ``calcpack draft`` of the demo takes beside the PDF engine alone on the same HTML; ratios in one run.

    python tests/bench/draft.py [PROJECT]

Prints, asserts nothing. Both are whole processes, start-up included, in turn, so that a drifting machine cancels out.
"""

from __future__ import annotations

import shutil
import statistics
import subprocess
import sys
import tempfile
import time
from pathlib import Path

ROOT = Path(__file__).parents[2]
ROUNDS = 3
BARE = (
    "import os, sys, weasyprint\n"
    "weasyprint.HTML(filename=sys.argv[1], base_url=sys.argv[2]).write_pdf(sys.argv[3], pdf_variant=sys.argv[4])\n"
)


def seconds(command: list[str]) -> float:
    """Wall time of one process; a failing process ends the run."""
    start = time.perf_counter()
    done = subprocess.run(command, cwd=ROOT, capture_output=True, text=True, check=False)
    if done.returncode not in (0, 1):
        sys.exit(done.stderr)
    return time.perf_counter() - start


def solving(folder: Path) -> tuple[float, float]:
    """Seconds of solving alone and of everything before the drawings, in this process."""
    from calcpack import build, hydraulics, project

    model = project.load(folder)
    hydraulics.solve(model)
    start = time.perf_counter()
    hydraulics.solve(model)
    solved = time.perf_counter() - start
    start = time.perf_counter()
    build.check(folder, lambda step: None)
    return solved, time.perf_counter() - start


def main(folder: Path) -> None:
    """Measure and print."""
    from calcpack import build
    from calcpack.package import package_of
    from calcpack.pictures import pictures
    from calcpack.report.fonts import TEMPLATES
    from calcpack.report.pages import render_html
    from calcpack.report.pdf import VARIANT

    with tempfile.TemporaryDirectory() as temporary:
        copy, html, pdf = Path(temporary) / "project", Path(temporary) / "p.html", Path(temporary) / "p.pdf"
        shutil.copytree(folder, copy, ignore=shutil.ignore_patterns("build"))
        outcome = build.check(copy, lambda step: None)
        package = package_of(outcome.job, outcome.content, outcome.fingerprint)
        html.write_text(render_html(package, outcome.job.ledger, pictures(outcome.job, outcome.content)))
        whole, bare = [], []
        for _ in range(ROUNDS):
            whole.append(seconds([sys.executable, "-m", "calcpack", "draft", str(copy)]))
            bare.append(seconds([sys.executable, "-c", BARE, str(html), f"{TEMPLATES.as_uri()}/", str(pdf), VARIANT]))
        solved, checked = solving(copy)
    draft = statistics.median(whole)
    print(f"calcpack draft           {draft:6.2f} s   (median of {ROUNDS})")
    print(f"PDF engine on its HTML   {statistics.median(bare):6.2f} s")
    ratios = [one / other for one, other in zip(whole, bare, strict=True)]
    print(f"ratio, pair by pair      {statistics.median(ratios):6.2f}     ({min(ratios):.2f} to {max(ratios):.2f})")
    print(f"solving                  {solved:6.3f} s   {solved / draft:.1%} of the draft")
    print(f"read, solve, fill        {checked:6.3f} s   {checked / draft:.1%} of the draft")


if __name__ == "__main__":
    sys.path.insert(0, str(ROOT))
    main(Path(sys.argv[1]) if len(sys.argv) > 1 else ROOT / "projects" / "larkmere-transfer")
