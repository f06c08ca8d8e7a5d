"""How long a whole review of a 10 minute log takes, in ratios to peers of the same run.

The review by rule is what the peers are compared with: it does what they do. The review with advice
from replay, the default, is compared with its own bound: twice the review by rule, plus 2 s.
"""
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


def timed_review(log, bike, *options):
    start = time.perf_counter()
    process = subprocess.Popen([build / "clickwise", "review", log, "--bike", bike, "--json", "-",
                                *options], stdout=subprocess.DEVNULL)
    _, status, usage = os.wait4(process.pid, 0)
    assert status == 0
    timed_review.memory = usage.ru_maxrss * 1024
    timed_review.processor_s = usage.ru_utime + usage.ru_stime
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
    replayed_s = best(lambda: timed_review(log, bike))
    replayed_processor_s, replayed_memory = timed_review.processor_s, timed_review.memory
    review_s = best(lambda: timed_review(log, bike, "--by-rule"))
    peer_s = best(lambda: peer(log))
    plain_s = best(lambda: peer(log, "--plain"))
    passes = json.loads(subprocess.run([build / "tests/benchmarks/from_chars_pass", log],
                                       check=True, capture_output=True, text=True).stdout)

bound_s = 2.0 * review_s + 2.0
rows = [
    ("log", f"{size / 1e6:8.1f} MB", ""),
    ("review --by-rule", f"{review_s:8.3f} s", f"{timed_review.processor_s:.2f} s of processor time"),
    ("pandas and SciPy, inside", f"{peer_s:8.3f} s", f"{peer_s / review_s:.2f} times the review by rule"),
    ("the same, much left out", f"{plain_s:8.3f} s", f"{plain_s / review_s:.2f} times the review by rule"),
    ("from_chars over every cell", f"{passes['cells_s']:8.3f} s",
     f"the review by rule is {review_s / passes['cells_s']:.2f} times it"),
    ("bytes read once", f"{passes['bytes_s']:8.3f} s",
     f"the review by rule is {review_s / passes['bytes_s']:.1f} times it"),
    ("its peak memory", f"{timed_review.memory / 1e6:8.1f} MB", f"{timed_review.memory / size:.2f} times the file"),
    ("review, advice by replay", f"{replayed_s:8.3f} s",
     f"{replayed_s / bound_s:.2f} of its bound of {bound_s:.2f} s; "
     f"{replayed_processor_s:.2f} s of processor time"),
    ("its peak memory", f"{replayed_memory / 1e6:8.1f} MB", f"{replayed_memory / size:.2f} times the file"),
]
for what, figure, against in rows:
    print(f"{what:<27} {figure:<12} {against}")
