"""What the analysis is measured against: windows of 2,560 samples, taken as they come, of a binary COMTRADE file.

Reads the file in blocks, separates the channels, scales them, and gives per window and channel rms, the lines of a real
FFT, harmonic subgroups to order 50 and THD. Nothing is synchronised, and nothing else is computed.

usage: fixed_window.py FILE FACTORS_JSON    says "ready", then answers every line "pass" or "memory"
on stdin with one line of JSON
"""

import json
import resource
import sys
import time

import numpy as np

WINDOW = 2560
CYCLES = 10
HIGHEST_ORDER = 50


# Blocks that stay in the cache: larger and smaller ones were slower.
WINDOWS_PER_BLOCK = 4


def measure(path, factors):
    channels = len(factors)
    row = np.dtype([("number", "<u4"), ("time", "<u4"), ("values", "<i2", (channels,))])
    lines = CYCLES * np.arange(1, HIGHEST_ORDER + 1)
    scale = factors[:, None]
    kept = []
    with open(path, "rb") as file:
        while True:
            rows = np.fromfile(file, dtype=row, count=WINDOWS_PER_BLOCK * WINDOW)
            windows = len(rows) // WINDOW
            if windows == 0:
                break
            values = rows["values"][: windows * WINDOW].T.astype(np.float64, order="C")
            values *= scale
            cut = values.reshape(channels, windows, WINDOW)
            rms = np.sqrt(np.einsum("cwn,cwn->cw", cut, cut) / WINDOW)
            spectrum = np.fft.rfft(cut, axis=-1)[..., : lines[-1] + 2]
            power = (spectrum.real**2 + spectrum.imag**2) * (2 / WINDOW**2)
            subgroups = np.sqrt(power[..., lines - 1] + power[..., lines] + power[..., lines + 1])
            thd = np.sqrt((subgroups[..., 1:] ** 2).sum(axis=-1)) / subgroups[..., 0]
            kept.append((rms, subgroups, thd))
    return [np.concatenate(parts, axis=1) for parts in zip(*kept)]


def main():
    path, factors = sys.argv[1], np.array(json.loads(sys.argv[2]))
    print("ready", flush=True)
    for line in sys.stdin:
        if line.strip() == "memory":
            # Kilobytes on Linux.
            answer = {"peak_MB": resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024}
        else:
            begin = time.perf_counter()
            busy = time.process_time()
            rms, subgroups, thd = measure(path, factors)
            seconds = time.perf_counter() - begin
            whole = np.sqrt((subgroups[0] ** 2).mean(axis=0))
            answer = {
                "seconds": seconds,
                "cpu_s": time.process_time() - busy,
                "windowCount": int(rms.shape[1]),
                "rms_V": float(np.sqrt((rms[0] ** 2).mean())),
                "fifth_pct": float(100 * whole[4] / whole[0]),
            }
        print(json.dumps(answer), flush=True)


main()
