"""Figures of one window of whole cycles, written from the definitions of IEC 61000-4-7 with NumPy alone.

stdin   {"samples": [...], "cycles": 10 | 12, "orders": highest order}
stdout  {"lines": one-sided rms lines as re, im ..., "rms", "components", "subgroups", "groups", "interharmonicSubgroups",
         "interharmonicGroups"}; rows by order from 0, null where a figure is not defined
"""

import json
import sys

import numpy as np


def main():
    task = json.load(sys.stdin)
    x = np.array(task["samples"])
    cycles, orders = task["cycles"], task["orders"]
    spectrum = np.fft.rfft(x) / len(x)
    spectrum[1:] *= np.sqrt(2)
    power = np.abs(spectrum) ** 2
    rows = {name: [None] * (orders + 1) for name in ("components", "subgroups", "groups", "interharmonicSubgroups", "interharmonicGroups")}
    for order in range(orders + 1):
        k = order * cycles
        rows["components"][order] = np.sqrt(power[k])
        rows["interharmonicGroups"][order] = np.sqrt(power[k + 1 : k + cycles].sum())
        rows["interharmonicSubgroups"][order] = np.sqrt(power[k + 2 : k + cycles - 1].sum())
        if order == 0:
            continue
        rows["subgroups"][order] = np.sqrt(power[k - 1 : k + 2].sum())
        half = cycles // 2
        inner = power[k - half + 1 : k + half].sum()
        rows["groups"][order] = np.sqrt(inner + (power[k - half] + power[k + half]) / 2)
    print(
        json.dumps(
            {
                "lines": np.column_stack([spectrum.real, spectrum.imag]).ravel().tolist(),
                "rms": float(np.sqrt((x**2).mean())),
                **{name: [None if v is None else float(v) for v in row] for name, row in rows.items()},
            }
        )
    )


main()
