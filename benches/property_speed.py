#!/usr/bin/env python3
"""Speed of the property engines beside a reference library, on the same states in one run.

Needs: cargo, and a Python with CoolProp 8 (any release with the low-level interface), for instance
    python3 -m venv ../bench-venv && ../bench-venv/bin/pip install CoolProp
    ../bench-venv/bin/python benches/property_speed.py

Both sides answer the same random states. The reference side is `AbstractState.update` of the HEOS
backend; the time of an empty loop with a trivial method call of the same object is taken off as
call overhead. Its update leaves enthalpy and entropy to be computed on demand, so a second column
adds `hmass` and `smass` (less two trivial calls); the engines here return all properties and
their first derivatives at once.
"""

import math
import pathlib
import random
import subprocess
import sys
import tempfile
import time

import CoolProp
import CoolProp.CoolProp as CP

FLUIDS = ["R134a", "CO2", "Ammonia", "n-Propane", "Nitrogen", "R1234yf"]
STATES = 1000
ROUNDS = 7


def states(name):
    """Random one-phase and two-phase states of a fluid: {pair: [(a, b)]}."""
    ref = CP.AbstractState("HEOS", name)
    rng = random.Random(name)
    t_min, t_max, p_max = ref.Ttriple() + 5.0, min(ref.Tmax(), 700.0), min(ref.pmax(), 3e7)
    p_c = ref.p_critical()
    out = {"pT": [], "px": [], "ph": [], "ps": []}
    while len(out["pT"]) < STATES:
        p = math.exp(rng.uniform(math.log(2e4), math.log(p_max)))
        t = rng.uniform(t_min, t_max)
        try:
            ref.update(CP.PT_INPUTS, p, t)
            row = (p, t, ref.hmass(), ref.smass())
        except ValueError:
            continue
        out["pT"].append((p, t))
    ref.update(CP.QT_INPUTS, 0, t_min)
    low = max(ref.p(), 1e3)
    while len(out["px"]) < STATES:
        p = math.exp(rng.uniform(math.log(low), math.log(0.98 * p_c)))
        out["px"].append((p, rng.uniform(0, 1)))
    return out


def least_time(job):
    best = math.inf
    for _ in range(ROUNDS):
        start = time.perf_counter()
        job()
        best = min(best, time.perf_counter() - start)
    return best / STATES * 1e9


def main():
    root = pathlib.Path(__file__).resolve().parent.parent
    sets = {}
    for name in FLUIDS:
        sets[name] = states(name)
    # Enthalpies and entropies stand on each side's own datum: take them from a first pass here.
    with tempfile.TemporaryDirectory() as folder:
        path = pathlib.Path(folder) / "states.csv"

        def ours():
            run = subprocess.run(
                ["cargo", "bench", "--no-default-features", "--bench", "property_speed", "--", str(path)],
                cwd=root, capture_output=True, text=True, check=False,
            )
            if run.returncode:
                sys.exit(run.stderr)
            return {tuple(x.split(",")[:2]): float(x.split(",")[2]) for x in run.stdout.split() if x.count(",") == 4}

        with path.open("w") as f:
            for name, pairs in sets.items():
                ref = CP.AbstractState("HEOS", name)
                ref.update(CP.PT_INPUTS, 1e5, 0.9 * min(ref.Tmax(), 700.0))
                for p, t in pairs["pT"]:
                    f.write(f"{name},pT,{p!r},{t!r}\n")
                    ref.update(CP.PT_INPUTS, p, t)
                    pairs["ph"].append((p, ref.hmass()))
                    pairs["ps"].append((p, ref.smass()))
                for pair in ("px", "ph", "ps"):
                    for a, b in pairs[pair]:
                        f.write(f"{name},{pair},{a!r},{b!r}\n")
        mine = ours()

    inputs = {"pT": CP.PT_INPUTS, "px": CP.PQ_INPUTS, "ph": CP.HmassP_INPUTS, "ps": CP.PSmass_INPUTS}
    print(f"CoolProp {CoolProp.__version__} HEOS low-level update, {STATES} states a row; nanoseconds a state")
    print(f"{'fluid':10} {'pair':4} {'here':>8} {'update':>9} {'ratio':>6} {'update+h+s':>11} {'ratio':>6}")
    for name, pairs in sets.items():
        ref = CP.AbstractState("HEOS", name)
        for pair, kind in inputs.items():
            # This pair takes the enthalpy first.
            rows = [(b, a) for a, b in pairs[pair]] if pair == "ph" else pairs[pair]
            update, trivial, h, s = ref.update, ref.gas_constant, ref.hmass, ref.smass

            def overhead(calls):
                def job():
                    for _a, _b in rows:
                        for _ in range(calls):
                            trivial()
                return job

            def only():
                for a, b in rows:
                    update(kind, a, b)

            def full():
                for a, b in rows:
                    update(kind, a, b)
                    h()
                    s()

            one, three = least_time(overhead(1)), least_time(overhead(3))
            plain, whole = least_time(only) - one, least_time(full) - three
            here = mine[(name, pair)]
            print(f"{name:10} {pair:4} {here:8.0f} {plain:9.0f} {plain / here:6.1f} {whole:11.0f} {whole / here:6.1f}")


if __name__ == "__main__":
    main()
