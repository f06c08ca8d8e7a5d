"""The peer: what a review does with a log, the way a script of pandas and SciPy would do it.

`--plain` leaves out what a hasty script leaves out: the search for faults, a filter chosen from the
log, joules, and the intervals by bootstrap; its filter is chosen by hand."""
import json
import sys
import time

import numpy as np
import pandas as pd
from scipy.fft import irfft, next_fast_len, rfft
from scipy.signal import savgol_filter, welch

ENDS = (("front", "fork_adc", ((210, 0.0), (3850, 170.0)), 170.0),
        ("rear", "shock_adc", ((300, 0.0), (3700, 65.0)), 65.0))
SPLIT, PLAIN = 700.0, "--plain" in sys.argv


def faults(travel, stroke):
    """Stuck, saturated and spiking samples (Hampel's rule on windows of 13)."""
    series = pd.Series(travel)
    steps = series.diff()
    run = (steps != 0).cumsum()
    stuck = run.map(run.value_counts()).to_numpy() > 1000
    saturated = (travel < -0.25 * stroke) | (travel > 1.25 * stroke)
    level = series.rolling(13, center=True, min_periods=1).median()
    off = (series - level).abs()
    scale = 1.4826 * off.rolling(13, center=True, min_periods=1).median()
    spikes = ((off > 3.5 * scale) & (off > 2.0)).to_numpy()
    return stuck | saturated | spikes


def smooth(travel, rate_hz):
    """A quintic smoothing spline, its cut-off by generalised cross-validation, and its noise."""
    if PLAIN:
        return (savgol_filter(travel, 15, 3),
                savgol_filter(travel, 15, 3, deriv=1, delta=1.0 / rate_hz), None)
    frequency, power = welch(travel, rate_hz, nperseg=4096)
    floor = np.median(power[frequency > 0.4 * rate_hz])
    n = next_fast_len(2 * len(travel), real=True)
    spectrum = rfft(np.concatenate([travel, travel[::-1]]), n)
    f = np.fft.rfftfreq(n, 1.0 / rate_hz)
    best = (np.inf, None)
    for cutoff in np.geomspace(8.0, 0.45 * rate_hz, 12):
        gain = 1.0 / (1.0 + (f / cutoff) ** 6)
        left = 1.0 - gain
        score = np.sum(np.abs(spectrum * left) ** 2) / np.mean(left) ** 2
        best = min(best, (score, cutoff))
    gain = 1.0 / (1.0 + (f / best[1]) ** 6)
    slope = 2j * np.pi * f
    noise = np.sqrt(np.sum(floor * np.abs(slope * gain) ** 2) * (f[1] - f[0]))
    position = irfft(spectrum * gain, n)[:len(travel)]
    return position, irfft(spectrum * gain * slope, n)[:len(travel)], noise


def force(speed):
    """Bleed and preloaded valve in parallel, the port in series (metres a second to newtons)."""
    bleed, opening, slope, port = 0.100, 380.0, 180.0, 22.0
    closed = 100.0 * (speed / bleed) ** 2
    half = bleed * slope / 20.0
    root = -half + np.sqrt(half * half + opening + slope * speed)
    return np.where(closed <= opening, closed, root * root) + port * speed ** 2


def bootstrap(values, generator):
    """90 % interval of a mean over blocks of five seconds."""
    picks = generator.integers(0, len(values), (400, len(values)))
    return np.percentile(values[picks].mean(axis=1), [5, 95]).tolist()


start = time.perf_counter()
log = pd.read_csv(sys.argv[1])
read = time.perf_counter()
t_s = log["t_us"].to_numpy() * 1e-6
rate_hz = 1.0 / np.median(np.diff(t_s))
base_s = np.arange(t_s[0], t_s[-1], 1.0 / rate_hz)
generator = np.random.default_rng(1)
result = {}
for end, column, calibration, stroke in ENDS:
    (r0, x0), (r1, x1) = calibration
    travel = x0 + (log[column].to_numpy() - r0) * (x1 - x0) / (r1 - r0)
    if not PLAIN:
        bad = faults(travel, stroke)
        travel = np.interp(base_s, t_s[~bad], travel[~bad])
    else:
        travel = np.interp(base_s, t_s, travel)
    position, velocity, noise = smooth(travel, rate_hz)
    edges = np.arange(np.floor(velocity.min() / 10) * 10, velocity.max() + 10, 10)
    report = {"mean_mm": float(position.mean()), "noise": noise,
              "travel": np.percentile(position, [50, 95]).tolist(),
              "histogram": (np.histogram(velocity, edges)[0] / rate_hz).tolist()}
    for direction, speed in (("compression", velocity[velocity >= 0]),
                             ("rebound", -velocity[velocity < 0])):
        report[direction] = {"low_s": float((speed <= SPLIT).sum() / rate_hz),
                             "high_s": float((speed > SPLIT).sum() / rate_hz),
                             "p": np.percentile(speed, [50, 95]).tolist()}
    over = position > stroke - 4
    report["bottom_outs"] = int(np.count_nonzero(over[1:] & ~over[:-1]))
    if not PLAIN:
        work = force(np.abs(velocity) * 1e-3) * np.abs(velocity) * 1e-3 / rate_hz
        report["joules"] = np.histogram(velocity, edges, weights=work)[0].tolist()
        report["metres"] = np.histogram(velocity, edges, weights=np.abs(velocity))[0].tolist()
        report["travel_histogram"] = np.histogram(position, 170)[0].tolist()
        report["top_outs"] = int(np.count_nonzero((position[1:] < 2) & (position[:-1] >= 2)))
        block = int(5 * rate_hz)
        cut = velocity[:len(velocity) // block * block].reshape(-1, block)
        report["share"] = bootstrap((cut > SPLIT).mean(axis=1), generator)
        report["deep"] = bootstrap(position[:cut.size].reshape(-1, block).mean(axis=1), generator)
    result[end] = report
text = json.dumps(result)
done = time.perf_counter()
print(json.dumps({"read_s": read - start, "all_s": done - start, "characters": len(text)}))
