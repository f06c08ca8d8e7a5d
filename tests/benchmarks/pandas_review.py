"""The peer: bands, travel and bottom-outs of both ends the way a short script would do it."""
import json
import sys
import time

import numpy as np
import pandas as pd
from scipy.signal import savgol_filter

start = time.perf_counter()
log = pd.read_csv(sys.argv[1])
read = time.perf_counter()
t_s = log["t_us"].to_numpy() * 1e-6
rate_hz = 1.0 / np.median(np.diff(t_s))
base_s = np.arange(t_s[0], t_s[-1], 1.0 / rate_hz)
result = {}
for end, column, calibration, stroke in (("front", "fork_adc", ((210, 0.0), (3850, 170.0)), 170.0),
                                         ("rear", "shock_adc", ((300, 0.0), (3700, 65.0)), 65.0)):
    (r0, x0), (r1, x1) = calibration
    travel = x0 + (log[column].to_numpy() - r0) * (x1 - x0) / (r1 - r0)
    travel = np.interp(base_s, t_s, travel)
    velocity = savgol_filter(travel, 15, 3, deriv=1, delta=1.0 / rate_hz)
    smooth = savgol_filter(travel, 15, 3)
    bands = {}
    for direction, speed in (("compression", velocity[velocity >= 0]),
                             ("rebound", -velocity[velocity < 0])):
        bands[direction] = {"low_s": float((speed <= 700).sum() / rate_hz),
                            "high_s": float((speed > 700).sum() / rate_hz),
                            "p50_mm_s": float(np.percentile(speed, 50)),
                            "p95_mm_s": float(np.percentile(speed, 95))}
    edges = np.arange(np.floor(velocity.min() / 10) * 10, velocity.max() + 10, 10)
    histogram = np.histogram(velocity, edges)[0] / rate_hz
    over = smooth > stroke - 4
    crossings = np.flatnonzero(over[1:] & ~over[:-1])
    result[end] = {"bands": bands, "mean_mm": float(smooth.mean()),
                   "histogram": histogram.tolist(), "bottom_outs": len(crossings)}
text = json.dumps(result)
done = time.perf_counter()
print(json.dumps({"read_s": read - start, "all_s": done - start, "characters": len(text)}))
