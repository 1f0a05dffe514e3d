"""Runs ngspice on the circuits and writes expected.tsv: `python3 figures.py [NAME...]`, beside circuits.py.

Given names, only their rows are written anew.
"""

import cmath
import math
import os
import subprocess
import sys
import tempfile

from circuits import CIRCUITS, OFFSETS
from decks import END, HERE, SHARES, START, bulk_of, deck, head, loop, node

GOAL = 45.0
GRID = [1e-3 * 30e3 ** (at / 23) for at in range(24)]
# Circuits with parts for which the tool has no device model: what a macromodel gives is compared at direct current alone.
PACKAGED = {"shunt_npn": ("Q1", 0.015), "shunt_pmos": ("Q1", 0.015), "outboard": ("U1", 0.02)}


def run(text):
    """Runs a deck; what it wrote, by name, as rows of numbers."""
    with tempfile.TemporaryDirectory() as folder:
        os.mkdir(os.path.join(folder, "out"))
        with open(os.path.join(folder, "deck.cir"), "w", encoding="utf-8") as file:
            file.write(text)
        subprocess.run(["ngspice", "-b", "deck.cir"], cwd=folder, check=True, capture_output=True)
        tables = {}
        for name in os.listdir(os.path.join(folder, "out")):
            with open(os.path.join(folder, "out", name), encoding="utf-8") as file:
                tables[name] = [[float(word) for word in line.split()] for line in file if line.strip()]
        return tables


def between(x0, y0, x1, y1, y):
    return x0 + (y - y0) / (y1 - y0) * (x1 - x0)


def at_input(rows, volts):
    return next(row[1] for row in rows if abs(row[0] - volts) < 1e-6)


def dropout(rows, nominal):
    """Across the pass device at the highest input below nominal at which the output is 2 % under its value there."""
    edge = 0.98 * abs(at_input(rows, nominal))
    below = [(abs(row[0]), abs(row[1])) for row in rows if abs(row[0]) <= abs(nominal) + 1e-6]
    for (v0, o0), (v1, o1) in zip(below, below[1:]):
        if o0 > edge >= o1:
            return between(v0, o0, v1, o1, edge) - edge
    raise ValueError("never drops")


def margin(rows):
    """Least phase margin over all crossings of |T| = 1, and its frequency; none where there is no crossing."""
    found = []
    points = [(math.log(row[0]), math.log(abs(complex(row[1], row[2]))), complex(row[1], row[2])) for row in rows]
    for (f0, m0, t0), (f1, m1, t1) in zip(points, points[1:]):
        if (m0 > 0) != (m1 > 0):
            share = m0 / (m0 - m1)
            phase = cmath.phase(t0) + share * cmath.phase(t1 / t0)
            degrees = (180 + math.degrees(phase) + 180) % 360 - 180
            found.append((degrees, math.exp(f0 + share * (f1 - f0))))
    return min(found, default=(math.inf, math.nan))


def margins(name, esrs):
    """For each ESR the least margin over the loads with its frequency and share of the load."""
    circuit = CIRCUITS[name]
    does = "".join(loop(circuit, share, esr, f"out/{at}_{share:g}") for at, esr in enumerate(esrs) for share in SHARES)
    tables = run(head(name) + START + does + END)
    return [min((*margin(tables[f"{at}_{share:g}"]), share) for share in SHARES) for at in range(len(esrs))]


def refined(name, outside, inside):
    """The ESR at which the margin crosses the goal, between one outside the window and one inside it."""
    for _ in range(2):
        steps = [outside * (inside / outside) ** (at / 8) for at in range(9)]
        least = [found[0] for found in margins(name, steps)]
        at = next(at for at in range(8) if least[at] < GOAL <= least[at + 1])
        outside, inside = steps[at], steps[at + 1]
        low, high = least[at], least[at + 1]
    if math.isinf(high):
        return math.sqrt(outside * inside)
    return math.exp(between(math.log(outside), low, math.log(inside), high, GOAL))


def window(name):
    """Kind and edges of the ESR window over all loads."""
    fine = [found[0] >= GOAL for found in margins(name, GRID)]
    runs = sum(now and not before for before, now in zip([False, *fine], fine))
    if runs != 1:
        return ("none" if runs == 0 else "split"), None, None
    first, last = fine.index(True), len(fine) - 1 - fine[::-1].index(True)
    low = None if first == 0 else refined(name, GRID[first - 1], GRID[first])
    high = None if last == len(fine) - 1 else refined(name, GRID[last + 1], GRID[last])
    return {(True, True): "all", (False, True): "lower", (True, False): "upper"}.get(
        (low is None, high is None), "two-sided"), low, high


def ramp(name, share, offset):
    """Whether the output is up after a ramp of the input of 100 ms."""
    circuit = CIRCUITS[name]
    text = head(name).replace(f"Vin in 0 DC {circuit['nominal']:g}", f"Vin in 0 PWL(0 0 0.1 {circuit['nominal']:g})")
    text = "\n".join(line for line in text.split("\n") if not line.startswith(".nodeset")).replace("reltol=1e-6", "reltol=1e-5")
    for at, (_, volts) in enumerate(circuit["others"], 1):
        text = text.replace(f"DC {volts:g}\nRload", f"PWL(0 0 0.1 {volts:g})\nRload")
    set_offset = f"alter vu1 {offset}\n" if offset else ""
    does = f"alter rload {circuit['volts'] / circuit['amps'] / share:.8g}\n{set_offset}tran 200u 0.4\nwrdata out/tr v(out)\n"
    end = abs(run(text + START.replace("optran 1 1 1 0 0 0\n", "") + does + END)["tr"][-1][1])
    return end > 0.9 * circuit["volts"]


SEGMENTS = [(-1e-3, -2e-5, 1e-5), (-2e-5, 2e-5, 1e-7), (2e-5, 1e-3, 1e-6), (1e-3, 0.05, 5e-5), (0.05, 1.0, 1e-3)]


def operating_points(name, share, offset):
    """Zeros of the current that holds a node of the bootstrapped reference, over all its voltages."""
    circuit = CIRCUITS[name]
    net, most, _ = circuit["force"]
    text = "\n".join(line for line in head(name).split("\n") if not line.startswith(".nodeset"))
    does = f"alter rload {circuit['volts'] / circuit['amps'] / share:.8g}\n" + (f"alter vu1 {offset}\n" if offset else "")
    for at, (low, high, step) in enumerate([*SEGMENTS, (1.0, most, 2e-3)]):
        does += f"dc vf {low} {high} {step}\nwrdata out/{at} i(vf)\ndestroy all\n"
    tables = run(text + f"Vf {node(circuit, net)} 0 DC 0\n" + START + does + END)
    rows = [row for at in range(len(SEGMENTS) + 1) for row in tables[str(at)]]
    signs = [row[1] > 0 for row in rows if row[1] != 0]
    return sum(one != other for one, other in zip(signs, signs[1:]))


def output(name, offset):
    circuit = CIRCUITS[name]
    load = f"alter rload {circuit['volts'] / circuit['amps']:.8g}\n" + (f"alter vu1 {offset}\n" if offset else "")
    nominal = circuit["nominal"]
    return at_input(run(head(name) + START + load + f"dc vin {nominal * 1.1:g} {nominal * 0.9:g} {-nominal / 1000:g}\n"
                        "wrdata out/dc v(out)\n" + END)["dc"], nominal)


def direct(name, case, add):
    """Output, dropout and line change."""
    circuit, tables = CIRCUITS[name], run(deck(name))
    full, light = tables[f"{name}_dc_1.dat"], tables[f"{name}_dc_0.1.dat"]
    nominal = circuit["nominal"]
    volts = at_input(full, nominal)
    # Where there are several operating points the simulator may have taken one without regulation.
    if abs(abs(volts) / circuit["volts"] - 1) > 0.05:
        raise ValueError(f"{name} at {volts} V does not regulate")
    add(case, "output_voltage", volts, "V", 0.005 * abs(volts), "nominal input, load 100 %")
    loads = [("dropout", full, 100)] + ([("dropout_light", light, 10)] if name != "high_room" else [])
    for fact, rows, load in loads:
        across = dropout(rows, nominal)
        add(case, fact, across, "V", max(3e-3, 0.03 * across), f"output 2 % under its value at nominal input, load {load} %")
    change = abs(at_input(full, nominal * 1.1) - at_input(full, nominal * 0.9)) * 1e3
    add(case, "line_change", change, "mV", max(2.0, 0.03 * change), "input -10 % to +10 %, load 100 %")


def alternating(name, case, add):
    """Margin and frequency with the bulk capacitor's own ESR, and its window."""
    esr = bulk_of(CIRCUITS[name])[3]
    degrees, hertz, share = margins(name, [esr])[0]
    where = f"least over 10/50/100 % load, found at {share * 100:g} %; ESR {esr:g} ohm"
    if math.isfinite(degrees):
        add(case, "phase_margin", degrees, "deg", 2, where)
        add(case, "unity_gain_frequency", hertz, "Hz", 0.03 * hertz, where)
    kind, low, high = window(name)
    told = f"{kind}: phase margin >= 45 deg over 10/50/100 % load, ESR 1 mohm .. 30 ohm, by bisection"
    add(case, "esr_window_kind", kind, "", 0, told)
    for fact, edge in (("esr_window_low", low), ("esr_window_high", high)):
        if kind not in ("none", "split"):
            add(case, fact, "unbounded" if edge is None else edge, "ohm", 0.02 * (edge or 0), told)


def starting(name, add):
    """Start-up and operating points, for each offset where there is one."""
    force = CIRCUITS[name]["force"]
    variants = OFFSETS.get(name, {"": "0"})
    singles = {offset: [ramp(name, share, offset) for share in (0.1, 1.0)] for offset in variants.values() if ".." not in offset}
    for variant, offset in variants.items():
        case = f"{name}.{variant}" if variant else name
        up = all(all(each) for each in singles.values()) if ".." in offset else all(singles[offset])
        told = f"offset {offset} V, " if name in OFFSETS else ""
        add(case, "starts", "yes" if up else "no", "", 0, told + "input ramp of 100 ms, 10 % and 100 % load")
        if force and ".." in offset:
            most = max(operating_points(name, 1.0, each) for each in singles)
            add(case, "operating_points", most, "", 0, told + "the most, nominal input, load 100 %")
        elif force:
            counts = {share: operating_points(name, share, offset) for share in (1.0, 0.1)}
            print(case, "operating points", counts)
            add(case, "operating_points", counts[1.0], "", 0, told + "nominal input, load 100 %")
            if variant and up:
                volts = output(name, offset)
                add(case, "output_voltage", volts, "V", 0.005 * abs(volts), told + "nominal input, load 100 %")


def figures(name):
    """The rows of one circuit."""
    rows = []

    def add(case, fact, value, unit, tolerance, condition):
        regulator = PACKAGED.get(name, ("Q1",))[0]
        value = f"{value:.6g}" if isinstance(value, float) else str(value)
        rows.append("\t".join([case, regulator, fact, value, unit, f"{tolerance:.4g}", condition]))

    if name in PACKAGED:
        tables, nominal = run(deck(name)), CIRCUITS[name]["nominal"]
        volts = at_input(tables[f"{name}_dc_1.dat"], nominal)
        add(name, "output_voltage", volts, "V", PACKAGED[name][1] * abs(volts), "nominal input, load 100 %, macromodel")
        for fact, share, load in (("dropout", "1", 100), ("dropout_light", "0.1", 10)):
            across = dropout(tables[f"{name}_dc_{share}.dat"], nominal)
            told = f"output 2 % under its value at nominal input, load {load} %, macromodel"
            add(name, fact, across, "V", max(3e-3, 0.03 * across), told)
        return rows
    # Where the offset is a range or the output is no regulated one, figures of a small signal stand for one offset.
    case = f"{name}.ref0" if name in OFFSETS else name
    direct(name, case, add)
    if CIRCUITS[name]["broken"] and name != "high_room":
        alternating(name, case, add)
    starting(name, add)
    seen = set()
    return [row for row in rows if (key := tuple(row.split("\t")[:3])) not in seen and not seen.add(key)]


def main():
    path = os.path.join(HERE, "expected.tsv")
    names = sys.argv[1:] or list(CIRCUITS)
    kept = {}
    if os.path.exists(path):
        with open(path, encoding="utf-8") as file:
            for line in file.read().splitlines()[1:]:
                kept.setdefault(line.split("\t")[0].split(".")[0], []).append(line)
    for name in names:
        kept[name] = figures(name)
        print("\n".join(kept[name]), flush=True)
    lines = ["case\tregulator\tfact\tvalue\tunit\ttolerance\tcondition"]
    lines += [line for name in CIRCUITS for line in kept.get(name, [])]
    with open(path, "w", encoding="utf-8") as file:
        file.write("\n".join(lines) + "\n")


if __name__ == "__main__":
    main()
