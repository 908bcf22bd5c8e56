"""Time ten thousand manoeuvres with and without links; run by hand: python tests/benchmarks/bench_links.py."""

from __future__ import annotations

import sys
import time
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).parents[1]))

from car.linked_car import linked
from car.worked_car import CAR

from blockload.car.balance import balance
from blockload.case.model import Manoeuvre

COUNT = 10_000


def main() -> None:
    random = np.random.default_rng(1)
    manoeuvres = [
        Manoeuvre(name=f"{k}", speed=60.0, acceleration=a, drive="accelerate", overall_ratio=5.0)
        for k, a in enumerate(random.normal(size=(COUNT, 3)) * (1.0, 8.0, 1.0) + (4.0, 0.0, 0.0))
    ]
    for name, case in (("corners as one wrench", CAR), ("links and rockers on both axles", linked())):
        best = np.inf
        for _ in range(3):
            start = time.perf_counter()
            cases = balance(case, manoeuvres)
            best = min(best, time.perf_counter() - start)
        print(f"{name}: {COUNT} manoeuvres, {len(cases.sources)} sources: {best:.2f} s; {lifted(cases.lifted)}")


def lifted(wheels: np.ndarray) -> str:
    return f"{int(wheels.any(axis=1).sum())} on three wheels"


if __name__ == "__main__":
    main()
