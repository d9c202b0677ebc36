"""Flickermeter of IEC 61000-4-15 put together from SciPy's parts, at the full sampling rate and in one go.

stdin   one JSON line: rate_Hz, frequencies_Hz, from, cases; then the samples, if any, as little-endian doubles
stdout  JSON per case: the statistics of P_inst, or without samples the responses of the filters at frequencies_Hz
"""
import json
import sys

import numpy
from scipy import signal

setup = json.loads(sys.stdin.buffer.readline())
voltage = numpy.frombuffer(sys.stdin.buffer.read(), dtype="<f8")
rate = setup["rate_Hz"]
turn = 2 * numpy.pi


def design(case):
    lamp = case["lamp"]
    w1, w2, w3, w4, damping = (turn * lamp[key] for key in ("w1", "w2", "w3", "w4", "lambda"))
    return [
        ([1, 0], [1, turn * 0.05]),
        signal.butter(6, turn * case["corner_Hz"], analog=True),
        ([lamp["k"] * w1, 0], [1, 2 * damping, w1**2]),
        ([1 / w2, 1], numpy.polymul([1 / w3, 1], [1 / w4, 1])),
    ]


def analogue(blocks, frequencies):
    s = 1j * turn * numpy.asarray(frequencies)
    return abs(numpy.prod([numpy.polyval(b, s) / numpy.polyval(a, s) for b, a in blocks], axis=0))


def butterworth(corner, frequencies):
    sections = signal.butter(6, corner, fs=rate, output="sos")
    return abs(signal.sosfreqz(sections, frequencies, fs=rate)[1])


def run(block, values):
    zeros, poles, gain = signal.tf2zpk(*block)
    return signal.sosfilt(signal.zpk2sos(*signal.bilinear_zpk(zeros, poles, gain, rate)), values)


def statistics(case):
    blocks = design(case)
    square = voltage**2
    share = 1 - numpy.exp(-numpy.log(9) / 60 / rate)
    start = square[:rate].mean()
    mean, _ = signal.lfilter([share], [1, share - 1], square[rate:], zi=[(1 - share) * start])
    level = numpy.concatenate([numpy.zeros(rate), square[rate:] / mean - 1])
    for block in blocks:
        level = run(block, level)
    unit = analogue(blocks, [8.8])[0] * case["unitSwing"]
    ripple = 1 / numpy.hypot(1, turn * 17.6 * 0.3)
    p_inst = run(([1], [0.3, 1]), level**2) / (unit**2 / 2 * (1 + ripple))
    counted = p_inst[setup["from"] :]

    def smoothed(*shares):
        return numpy.percentile(counted, [100 - share for share in shares]).mean()

    levels = {
        "p0_1": smoothed(0.1),
        "p1s": smoothed(0.7, 1, 1.5),
        "p3s": smoothed(2.2, 3, 4),
        "p10s": smoothed(6, 8, 10, 13, 17),
        "p50s": smoothed(30, 50, 80),
    }
    weights = {"p0_1": 0.0314, "p1s": 0.0525, "p3s": 0.0657, "p10s": 0.28, "p50s": 0.08}
    pst = sum(weights[key] * levels[key] for key in levels) ** 0.5
    return {"levels": levels, "pst": pst, "pInstMax": counted.max()}


def responses(case):
    frequencies = setup["frequencies_Hz"]
    return {
        "butterworth": butterworth(case["corner_Hz"], frequencies).tolist(),
        "analogue": analogue(design(case), frequencies).tolist(),
    }


print(json.dumps([(statistics if len(voltage) > 0 else responses)(case) for case in setup["cases"]]))
