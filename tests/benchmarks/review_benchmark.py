"""How long a whole review of a 10 minute log takes, in ratios to peers of the same run."""
import json
import os
import pathlib
import subprocess
import sys
import tempfile
import time

build = pathlib.Path(sys.argv[1]).resolve()
here = pathlib.Path(__file__).resolve().parent
repeats = 5


def best(job):
    return min(job() for _ in range(repeats))


def timed_review(log, bike):
    start = time.perf_counter()
    process = subprocess.Popen([build / "clickwise", "review", log, "--bike", bike, "--json", "-"],
                               stdout=subprocess.DEVNULL)
    _, status, usage = os.wait4(process.pid, 0)
    assert status == 0
    timed_review.memory = usage.ru_maxrss * 1024
    return time.perf_counter() - start


def peer(log, *options):
    out = subprocess.run([sys.executable, here / "pandas_review.py", log, *options], check=True,
                         capture_output=True, text=True).stdout
    return json.loads(out)["all_s"]


with tempfile.TemporaryDirectory() as folder:
    subprocess.run([build / "clickwise", "simulate", here / "ten-minutes" / "scene.toml", "-o",
                    folder, "--quiet"], check=True)
    log, bike = pathlib.Path(folder) / "log.csv", pathlib.Path(folder) / "bike.toml"
    size = log.stat().st_size
    review_s = best(lambda: timed_review(log, bike))
    peer_s = best(lambda: peer(log))
    plain_s = best(lambda: peer(log, "--plain"))
    passes = json.loads(subprocess.run([build / "tests/benchmarks/from_chars_pass", log],
                                       check=True, capture_output=True, text=True).stdout)

print(f"log                          {size / 1e6:8.1f} MB")
print(f"review --json -, the process {review_s:8.3f} s")
print(f"pandas and SciPy, inside     {peer_s:8.3f} s   {peer_s / review_s:6.2f} times the review")
print(f"the same, much left out      {plain_s:8.3f} s   {plain_s / review_s:6.2f} times the review")
print(f"from_chars over every cell   {passes['cells_s']:8.3f} s   review is "
      f"{review_s / passes['cells_s']:.2f} times it")
print(f"bytes read once              {passes['bytes_s']:8.3f} s   review is "
      f"{review_s / passes['bytes_s']:.1f} times it")
print(f"peak memory                  {timed_review.memory / 1e6:8.1f} MB  "
      f"{timed_review.memory / size:6.2f} times the file")
