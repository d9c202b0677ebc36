"""Trigonometric interpolation of a whole number of periods with scipy.signal, and the lines of the result.

stdin   {"samples": [...] one window, periodic, "points": points after interpolation}
stdout  {"values": interpolated values, "lines": rfft of them as re, im ...}
"""

import json
import sys

import numpy as np
from scipy import signal

task = json.load(sys.stdin)
values = signal.resample(np.array(task["samples"]), task["points"])
lines = np.fft.rfft(values)
print(json.dumps({"values": values.tolist(), "lines": np.column_stack([lines.real, lines.imag]).ravel().tolist()}))
