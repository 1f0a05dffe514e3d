"""Writes each circuit as a schematic export and its board files: `python3 export.py`, beside circuits.py."""

import os
import re
import uuid

from circuits import CIRCUITS, MODELS, OFFSETS, SYMBOLS

HERE = os.path.dirname(os.path.abspath(__file__))
SPACE = uuid.UUID("6e3c6d0e-7d0f-5a0b-9a55-2f7a2b8c1d90")
VALUES = {"NPN": "NPN 60V 6A", "PNP": "PNP 60V 6A", "NPN4": "BCP56", "NPN_PAIR": "NPN pair", "NMOS": "NMOS 60V 15A",
          "PMOS": "PMOS 60V 3A"}


def pins(symbol):
    """(number, name, type) of each pin."""
    return [tuple(pin.split(":")) for pin in SYMBOLS[symbol][4].split()]


def all_parts(circuit):
    """The parts of the table with the terminals at both ends of the board."""
    ends = [(circuit["supply"], "FROM RECTIFIER")] + [(net, "AUX") for net, _ in circuit["others"]]
    ends.append((circuit["rail"], "LOAD"))
    return circuit["parts"] + [
        (f"J{at}", "TERM", value, None, {"1": net, "2": "GND"}) for at, (net, value) in enumerate(ends, 1)]


def connections(circuit):
    """Net -> [(ref, number, name, type)], sorted as an export has them."""
    nets = {}
    for ref, symbol, _, _, on in all_parts(circuit):
        for number, name, kind in pins(symbol):
            nets.setdefault(on.get(number, on.get(name)), []).append((ref, number, name, kind))
    return {net: sorted(nodes, key=lambda node: (natural(node[0]), int(node[1]))) for net, nodes in nets.items()}


def natural(text):
    return [int(part) if part.isdigit() else part for part in re.split(r"(\d+)", text)]


def shown(net, nodes):
    """Power symbols by their name, labels with the sheet's, the rest as the editor names what has no label."""
    if net == "GND" or net[0] in "+-":
        return net
    if len(net) > 2:
        return f"/{net}"
    ref, number, name, _ = nodes[0]
    return f"Net-({ref}-{name or 'Pad' + number})"


def value_of(symbol, value):
    return value or VALUES.get(symbol, SYMBOLS[symbol][1])


def component(stem, ref, symbol, value):
    lib, part, text, footprint, _ = SYMBOLS[symbol]
    value = value_of(symbol, value)
    return f"""    (comp (ref "{ref}")
      (value "{value}")
      (footprint "{footprint}")
      (datasheet "~")
      (description "{text}")
      (fields
        (field (name "Footprint") "{footprint}")
        (field (name "Datasheet") "~")
        (field (name "Description") "{text}"))
      (libsource (lib "{lib}") (part "{part}") (description "{text}"))
      (property (name "Sheetname") (value "Root"))
      (property (name "Sheetfile") (value "{stem}.kicad_sch"))
      (sheetpath (names "/") (tstamps "/"))
      (tstamps "{uuid.uuid5(SPACE, stem + ref)}"))"""


def library_part(symbol):
    lib, part, text, footprint, _ = SYMBOLS[symbol]
    lines = "\n".join(f'        (pin (num "{n}") (name "{name}") (type "{kind}"))' for n, name, kind in pins(symbol))
    return f"""    (libpart (lib "{lib}") (part "{part}")
      (description "{text}")
      (docs "~")
      (fields
        (field (name "Value") "{part}")
        (field (name "Footprint") "{footprint}")
        (field (name "Description") "{text}"))
      (pins
{lines}))"""


def node(ref, number, name, kind):
    told = f' (pinfunction "{name}")' if name else ""
    return f'      (node (ref "{ref}") (pin "{number}"){told} (pintype "{kind}"))'


def netlist(stem, circuit):
    parts = sorted(all_parts(circuit), key=lambda part: natural(part[0]))
    components = "\n".join(component(stem, ref, symbol, value) for ref, symbol, value, _, _ in parts)
    symbols = sorted({part[1] for part in parts}, key=lambda symbol: SYMBOLS[symbol][:2])
    library = "\n".join(library_part(symbol) for symbol in symbols)
    found = connections(circuit)
    names = sorted((shown(net, nodes), net) for net, nodes in found.items())
    nets = "\n".join(
        f'    (net (code "{code}") (name "{name}")\n' + "\n".join(node(*each) for each in found[net]) + ")"
        for code, (name, net) in enumerate(names, 1))
    return f"""(export (version "E")
  (design
    (source "/home/grower/greenhouse/{stem}/{stem}.kicad_sch")
    (date "2025-09-02T08:12:40+0200")
    (tool "Eeschema 8.0.4")
    (sheet (number "1") (name "/") (tstamps "/")
      (title_block
        (title "{circuit['title']}")
        (company "Greenhouse controller")
        (rev "B")
        (date "2025-09-02")
        (source "{stem}.kicad_sch"))))
  (components
{components})
  (libparts
{library})
  (nets
{nets}))
"""


def milli(value):
    return f"{value * 1000:g}"


# Of packaged regulators, as in their macromodels.
DROPOUTS = {"L7805": "2 V at 1 A"}


def board(stem, circuit, offset=None):
    """The board file; ESR and offset are written as ranges, so that they are taken as they stand."""
    sign = -1 if circuit["nominal"] < 0 else 1
    span = sorted(sign * abs(circuit["nominal"]) * share for share in (0.9, 1.1))
    peak = circuit["amps"]
    lines = [f"# {stem}" + (f", op-amp offset {offset} V" if offset else ""), "[board]", f'title = "{circuit["title"]}"',
             'ambient = "27 .. 27 °C"', "", "[[supply]]", f'net = "{circuit["supply"]}"',
             f'voltage = "{span[0]:g} .. {span[1]:g} V"', ""]
    for net, volts in circuit["others"]:
        lines += ["[[supply]]", f'net = "{net}"', f'voltage = "{volts:g} .. {volts:g} V"', ""]
    lines += ["[[load]]", f'net = "{circuit["rail"]}"', f'current = "{milli(peak / 10)} .. {milli(peak)} mA"', ""]
    for ref, symbol, _, model, _ in sorted(circuit["parts"], key=lambda part: natural(part[0])):
        if symbol in ("C", "CP"):
            lines += ["[[part]]", f'ref = "{ref}"']
            lines += ['technology = "ceramic-1"'] if symbol == "C" else []
            lines += [f'esr = "{milli(model)} .. {milli(model)} mΩ"'] if model or symbol == "CP" else []
            lines += ['tolerance = "±0 %"', ""]
        elif isinstance(model, str):
            text = MODELS[model]
            text = text.replace("VOS=0 ", f"VOS={offset} ") if offset and text.startswith("opamp") else text
            lines += ["[[part]]", f'ref = "{ref}"', f'model = "{text}"', ""]
        elif symbol in DROPOUTS:
            lines += ["[[part]]", f'ref = "{ref}"', f'dropout = "{DROPOUTS[symbol]}"', ""]
    return "\n".join(lines[:-1]) + "\n"


def write(name, text):
    with open(os.path.join(HERE, "nets", name), "w", encoding="utf-8") as file:
        file.write(text)


if __name__ == "__main__":
    os.makedirs(os.path.join(HERE, "nets"), exist_ok=True)
    for stem, circuit in CIRCUITS.items():
        write(f"{stem}.net", netlist(stem, circuit))
        for variant, offset in OFFSETS.get(stem, {"": None}).items():
            write(f"{stem}{'.' + variant if variant else ''}.railworthy.toml", board(stem, circuit, offset))
