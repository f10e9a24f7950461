"""Six windowed transforms with magnitudes, the straightforward way: the figure that benches/panes.rs compares with.

Prints the median seconds of one pass over six windows of N samples (the first argument). Needs SciPy.
"""

import sys
import time

import numpy as np
import scipy.fft
from scipy.signal import get_window

ROUNDS = 9

n = int(sys.argv[1])
i = np.arange(n)
x = np.sin(0.0321 * i) + 1e-3 * np.cos(0.77 * i)
names = ["boxcar", "hann", "hamming", "blackman", "blackmanharris", "flattop"]
windows = [get_window(name, n, fftbins=True) for name in names]
times = []
for _ in range(ROUNDS + 1):
    start = time.perf_counter()
    for w in windows:
        np.abs(scipy.fft.rfft(x * w))
    times.append(time.perf_counter() - start)
# The first round warms caches and plans.
print(sorted(times[1:])[ROUNDS // 2])
