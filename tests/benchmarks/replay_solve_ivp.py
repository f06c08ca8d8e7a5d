"""Rides the ground that replay_benchmark wrote (--forcing FILE) by SciPy's solve_ivp.

The same model: two masses, spring table, the hydraulic law turned round, one-sided tyre, stops.
Friction is smoothed over 1 mm/s, since solve_ivp has no stick. Prints seconds of one core a second
of ride, and the ratio to the lanes' figure, given as a second argument.
"""
import json
import sys
import time

import numpy as np
from scipy.integrate import solve_ivp

bike = json.load(open(sys.argv[1]))
ground, load = np.array(bike["ground_m"]), np.array(bike["load_m_s2"])
h, spring, cell = bike["step_s"], np.array(bike["spring_n"]), bike["cell_m"]
rate = np.diff(ground, prepend=ground[0]) / h
k_t, c_t = bike["tyre"]
k_stop, loss = bike["stop"]
m_s, m_u, friction = bike["sprung_kg"], bike["unsprung_kg"], bike["friction_n"]
wheel_travel = cell * (len(spring) - 1)


def damper(v):
    bleed, opening, slope, port = bike["compression"] if v >= 0.0 else bike["rebound"]
    speed = abs(v)
    b = bleed / 10.0
    if speed < b * opening**0.5:
        pressure = (speed / b) ** 2
    else:
        q, c = slope * b, opening + slope * speed
        pressure = (0.5 * (-q + (q * q + 4.0 * c) ** 0.5)) ** 2
    return np.copysign(pressure + port * v * v, v)


def motion(t, y):
    sprung, sprung_rate, wheel, wheel_rate = y
    n = min(int(t / h), len(ground) - 1)
    z, v = wheel - sprung, wheel_rate - sprung_rate
    u = min(max(z / cell, 0.0), len(spring) - 2.0)
    i = int(u)
    held = spring[i] + (z / cell - i) * (spring[i + 1] - spring[i])
    if z > wheel_travel:
        held += k_stop * (z - wheel_travel) * max(0.0, 1.0 + loss * v)
    elif z < 0.0:
        held += k_stop * z * max(0.0, 1.0 - loss * v)
    force = held + damper(v) + friction * np.tanh(v / 1e-3)
    pressed = ground[n] - wheel
    tyre = max(0.0, k_t * pressed + c_t * (rate[n] - wheel_rate)) if pressed > 0.0 else 0.0
    return [sprung_rate, force / m_s - load[n], wheel_rate, (tyre - force) / m_u - load[n]]


seconds = h * len(ground)
start = [0.0, 0.0, *bike["start"]]
begin = time.process_time()
ride = solve_ivp(motion, (0.0, seconds), start, method="LSODA", rtol=1e-4, atol=1e-6, max_step=h)
used = (time.process_time() - begin) / seconds
print(f"solve_ivp (LSODA): {used:.3g} s of one core a second of ride, {ride.nfev} evaluations, "
      f"{ride.message}")
if len(sys.argv) > 2:
    print(f"the lanes are {used / float(sys.argv[2]):.0f} times as fast")
