"""Writes each circuit as a deck for ngspice: `python3 decks.py`, beside circuits.py."""

import math
import os
import re

from circuits import CIRCUITS, MODELS, SYMBOLS

HERE = os.path.dirname(os.path.abspath(__file__))
SHARES = (0.1, 0.5, 1.0)
OPTIONS = ".options reltol=1e-6 abstol=1e-12 vntol=1e-9 itl1=500 itl2=500"
KINDS = {"npn": "NPN", "pnp": "PNP", "nmos": "NMOS", "pmos": "PMOS", "diode": "D", "zener": "D", "shunt": "D"}


def ohms(text):
    """A value as drawn: 4k7, 6R8, 820."""
    letters = {"p": 1e-12, "n": 1e-9, "u": 1e-6, "R": 1.0, "k": 1e3, "M": 1e6}
    found = re.fullmatch(r"(\d+)([pnuRkM]?)(\d*)", text)
    return float(f"{found[1]}.{found[3] or 0}") * letters.get(found[2], 1.0)


def node(circuit, net):
    own = net.strip("+-").lower()
    # A deck does not tell IN from in.
    own = f"{own}_pin" if own in ("in", "out") else own
    return {"GND": "0", circuit["supply"]: "in", circuit["rail"]: "out"}.get(net, own)


def parameters(model):
    return dict(word.split("=") for word in MODELS[model].split()[1:])


def model_line(name):
    own = parameters(name)
    if MODELS[name].startswith("opamp"):
        return op_amp(name, own)
    kind = MODELS[name].split()[0]
    words = " ".join(f"{key}={value}" for key, value in own.items() if key not in ("CGS", "CGD", "CDS"))
    level = "LEVEL=1 " if kind.endswith("mos") else ""
    return f".model {name} {KINDS[kind]}({level}{words})"


def op_amp(name, own):
    """The op-amp: a limited transconductance into 40 pF, clamped to its room at the rails, a buffer, its resistance."""
    a0, gbw, slew, top, bottom = (float(own[key]) for key in ("A0", "GBW", "SR", "TOP", "BOTTOM"))
    gm, most = 2 * math.pi * gbw * 40e-12, slew * 40e-12
    return f"""* op-amp: GBW {gbw:g} Hz, A0 {a0:g}, slew {slew:g} V/s, top headroom {top:g} V, bottom headroom {bottom:g} V
.subckt {name} inp inn vcc vee out
BGM 0 x I={most:.6g}*tanh({gm:.6g}*(v(inp)-v(inn))/{most:.6g})
RG x 0 {a0 / gm:.6g}
CG x 0 4e-11
BH hi 0 V=0.5*((v(vcc)-{top:g})+(v(vee)+{bottom:g})+sqrt(((v(vcc)-{top:g})-(v(vee)+{bottom:g}))^2+1e-4))-0.55
BL lo 0 V=v(vee)+{bottom:g}+0.55
DH x hi DCL
DL lo x DCL
EO o 0 x 0 1
RO o out {own["RO"]}
.ends"""


def part_lines(circuit, part):
    """The elements of one part; the pin at which the loop is broken gets a node of its own."""
    ref, symbol, value, model, on = part
    broken = circuit["broken"] or (None, None, None)

    def at(*names):
        name = next(name for name in names if name in on)
        return "probe" if broken[:2] == (ref, name) else node(circuit, on[name])

    if symbol == "R":
        return [f"{ref} {at('1')} {at('2')} {ohms(value):g}"]
    if symbol in ("C", "CP"):
        if not model:
            return [f"{ref} {at('1')} {at('2')} {ohms(value):g}"]
        # The plates of a polarized capacitor do not matter here, but the bulk capacitor's ESR is altered by name.
        return [f"{ref} {at('1')} {ref.lower()}e {ohms(value):g}", f"R{ref} {ref.lower()}e {at('2')} {model:g}"]
    if model is None:
        return programmable(ref, symbol, at)
    kind = MODELS[model].split()[0]
    if kind == "opamp":
        plus = at("+", "3")
        lines = [f"V{ref} {ref.lower()}p {plus} DC 0",
                 f"X{ref} {ref.lower()}p {at('-', '2')} {at('V+')} {at('V-')} {at('4', '1')} {model}"]
        if on.get("5", "GND") != "GND":
            lines.append(f"X{ref}B {at('5')} {at('6')} {at('V+')} {at('V-')} {at('7')} {model}")
        return lines
    if kind.endswith("mos"):
        own = parameters(model)
        gate, drain, source = at("G"), at("D"), at("S")
        return [f"M{ref[1:]} {drain} {gate} {source} {source} {model} W=1u L=1u", f"CGS{ref} {gate} {source} {own['CGS']}",
                f"CGD{ref} {gate} {drain} {own['CGD']}", f"CDS{ref} {drain} {source} {own['CDS']}"]
    if kind in ("npn", "pnp"):
        if "1" in on:
            one = [node(circuit, on[pin]) for pin in ("6", "2", "1")]
            two = [node(circuit, on[pin]) for pin in ("3", "5", "4")]
            return [f"{ref}A {' '.join(one)} {model}", f"{ref}B {' '.join(two)} {model}"]
        return [f"{ref} {at('C')} {at('B')} {at('E')} {model}"]
    return [f"{ref} {at('A')} {at('K')} {model}"]


def programmable(ref, symbol, at):
    """Packaged parts, as far as their direct voltages go."""
    if symbol == "TL431":
        return [f"B{ref} {at('K')} {at('A')} I=0.05*(1+tanh(400*(v({at('REF')})-v({at('A')})-2.495)))"
                f"*tanh((v({at('K')})-v({at('A')}))/0.5)*0.5"]
    # What it takes from its input it gives to its output, at 5 V behind 20 mohm, down to 2 V across it.
    return [f"B{ref} {at('IN')} {at('OUT')} I=50*(5-v({at('OUT')}))*0.5*(1+tanh(20*(v({at('IN')})-v({at('OUT')})-2.1)))",
            f"I{ref} {at('IN')} 0 4m"]


def head(name):
    """Everything of a deck but what it does."""
    circuit = CIRCUITS[name]
    sign = -1 if circuit["nominal"] < 0 else 1
    lines = [f"* {name}: {circuit['title']}", "* greenhouse controller", OPTIONS, f"Vin in 0 DC {circuit['nominal']:g}"]
    lines += [f"VS{at} {node(circuit, net)} 0 DC {volts:g}" for at, (net, volts) in enumerate(circuit["others"], 1)]
    lines.append(f"Rload out 0 {circuit['volts'] / circuit['amps']:.6g}")
    for part in circuit["parts"]:
        lines += part_lines(circuit, part)
    if circuit["broken"]:
        ref, name_of_pin, side = circuit["broken"]
        net = node(circuit, next(part for part in circuit["parts"] if part[0] == ref)[4][name_of_pin])
        driver, receiver = ("probe", net) if side == "drives" else (net, "probe")
        lines += [f"Vinj {driver} {receiver} DC 0 AC 0", f"Iinj 0 {driver} DC 0 AC 0"]
    models = sorted({part[3] for part in circuit["parts"] if isinstance(part[3], str)})
    lines += [model_line(model) for model in models] + [".model DCL D(IS=1e-14 N=1)"]
    held = f" v({node(circuit, circuit['force'][0])})={circuit['force'][2]:g}" if circuit["force"] else ""
    lines.append(f".nodeset v(out)={sign * circuit['volts']:g}{held}")
    return "\n".join(lines) + "\n"


def bulk_of(circuit):
    return next(part for part in circuit["parts"] if part[1] == "CP")


def sweep(circuit, share, name):
    nominal = circuit["nominal"]
    load = circuit["volts"] / circuit["amps"] / share
    return f"alter rload {load:.8g}\ndc vin {nominal * 1.1:g} 0 {-nominal / 1000:g}\nwrdata {name} v(out)\ndestroy all\n"


def loop(circuit, share, esr, name):
    """The loop gain by double injection; `w` and `t` are those of the two-port between the sides of the break."""
    driver = "v(probe)" if circuit["broken"][2] == "drives" else None
    ref, pin, _ = circuit["broken"]
    driver = driver or f"v({node(circuit, next(part for part in circuit['parts'] if part[0] == ref)[4][pin])})"
    runs = []
    for at, (volts, amps) in enumerate([(1, 0), (0, 1)], 1):
        runs += [f"alter vinj acmag={volts}", f"alter iinj acmag={amps}", "ac dec 40 10 100meg", f"let v{at}={driver}",
                 f"let i{at}=i(vinj)"] + (["set p1=$curplot"] if at == 1 else [])
    return "\n".join([f"alter rload {circuit['volts'] / circuit['amps'] / share:.8g}", f"alter r{bulk_of(circuit)[0].lower()} {esr:.8g}",
                      *runs, "let w=2*({$p1}.i1*v2-{$p1}.v1*i2)+{$p1}.v1+i2", "let t=w/(1-w)", f"wrdata {name} t",
                      "destroy all"]) + "\n"


START = ".control\noptran 1 1 1 0 0 0\nset wr_singlescale\nset numdgt=10\n"
END = "quit 0\n.endc\n.end\n"


def deck(name):
    """Sweeps of the input at 10 and 100 % load, the loop gain at 10, 50 and 100 % load with the bulk capacitor's own ESR."""
    circuit = CIRCUITS[name]
    # The loop comes first: what is looked for after a sweep begins at the sweep's end, at no input.
    does = ""
    if circuit["broken"]:
        does += "".join(loop(circuit, share, bulk_of(circuit)[3], f"out/{name}_ac_{share:g}.dat") for share in SHARES)
    does += "".join(sweep(circuit, share, f"out/{name}_dc_{share:g}.dat") for share in (0.1, 1.0))
    return head(name) + START + does + END


if __name__ == "__main__":
    os.makedirs(os.path.join(HERE, "decks"), exist_ok=True)
    for name in CIRCUITS:
        with open(os.path.join(HERE, "decks", f"{name}.cir"), "w", encoding="utf-8") as file:
            file.write(deck(name))
