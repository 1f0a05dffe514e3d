"""Circuits of an invented greenhouse controller: one table from which netlists, board files and decks are written."""

MODELS = {
    "power_npn": "npn IS=5e-13 BF=90 BR=4 VAF=80 IKF=3 ISE=1e-12 NE=1.6 RB=2 RC=0.1 RE=0.02 CJE=400e-12 CJC=150e-12 TF=20e-9 TR=600e-9",
    "power_pnp": "pnp IS=5e-13 BF=80 BR=4 VAF=60 IKF=2.5 ISE=1e-12 NE=1.6 RB=2.5 RC=0.12 RE=0.03 CJE=450e-12 CJC=180e-12 TF=28e-9 TR=700e-9",
    "medium_npn": "npn IS=1e-13 BF=130 BR=6 VAF=90 IKF=0.9 ISE=1.5e-13 NE=1.6 RB=6 RC=0.25 RE=0.08 CJE=90e-12 CJC=30e-12 TF=1.2e-9 TR=200e-9",
    "medium_pnp": "pnp IS=1e-13 BF=110 BR=6 VAF=60 IKF=0.8 ISE=1.5e-13 NE=1.6 RB=7 RC=0.3 RE=0.09 CJE=100e-12 CJC=36e-12 TF=1.5e-9 TR=220e-9",
    "small_npn": "npn IS=1.5e-14 BF=260 BR=6 VAF=75 IKF=0.12 ISE=2e-14 NE=1.7 RB=12 RC=0.6 RE=0.25 CJE=12e-12 CJC=4e-12 TF=0.5e-9 TR=80e-9",
    "small_pnp": "pnp IS=2e-14 BF=220 BR=6 VAF=45 IKF=0.1 ISE=3e-14 NE=1.7 RB=14 RC=0.7 RE=0.3 CJE=11e-12 CJC=5e-12 TF=0.7e-9 TR=90e-9",
    "nmos": "nmos VTO=2.4 KP=4 LAMBDA=0.008 RD=0.06 RS=0.02 IS=1e-12 CGS=700e-12 CGD=120e-12 CDS=250e-12",
    "pmos": "pmos VTO=-2.6 KP=3 LAMBDA=0.01 RD=0.08 RS=0.02 IS=1e-12 CGS=900e-12 CGD=160e-12 CDS=220e-12",
    "zener51": "zener IS=1e-14 N=1 BV=5.1 IBV=5e-3 NBV=1.2 RS=8 CJO=150e-12",
    "zener62": "zener IS=1e-14 N=1 BV=6.2 IBV=5e-3 NBV=0.8 RS=4 CJO=120e-12",
    "zener13": "zener IS=1e-14 N=1 BV=12.7 IBV=5e-3 NBV=1 RS=6 CJO=60e-12",
    "shunt25": "shunt IS=1e-14 N=1 BV=2.5 IBV=1e-3 NBV=0.3 RS=0.3 CJO=50e-12",
    "shunt50": "shunt IS=1e-14 N=1 BV=5 IBV=1e-3 NBV=0.3 RS=0.4 CJO=45e-12",
    "diode": "diode IS=3e-9 N=1.8 RS=0.6 CJO=4e-12 TT=5e-9",
    "op_wide": "opamp A0=2e5 GBW=1.2e6 SR=0.6e6 VOS=0 TOP=1.5 BOTTOM=0.05 RO=100",
    "op_rail": "opamp A0=1e5 GBW=3e6 SR=2e6 VOS=0 TOP=0.1 BOTTOM=0.1 RO=100",
    "op_split": "opamp A0=2e5 GBW=1e6 SR=0.5e6 VOS=0 TOP=1.2 BOTTOM=1.4 RO=100",
    "op_high": "opamp A0=1e5 GBW=1e6 SR=0.5e6 VOS=0 TOP=2.9 BOTTOM=0.05 RO=100",
}

# Library, symbol, description, footprint, and pins as number, name and type; a terminal of the table is a pin's name, or
# its number where names are not enough.
SYMBOLS = {
    "R": ("Device", "R", "Resistor", "Resistor_SMD:R_0805_2012Metric", "1::passive 2::passive"),
    "C": ("Device", "C", "Unpolarized capacitor", "Capacitor_SMD:C_0805_2012Metric", "1::passive 2::passive"),
    "CP": ("Device", "C_Polarized", "Polarized capacitor", "Capacitor_THT:CP_Radial_D8.0mm_P3.50mm", "1::passive 2::passive"),
    "ZENER": ("Device", "D_Zener", "Zener diode", "Diode_SMD:D_SOD-123", "1:K:passive 2:A:passive"),
    "ZENER3": ("Diode", "BZX84Cxx", "300mW Zener Diode, SOT-23", "Package_TO_SOT_SMD:SOT-23", "1:A:passive 3:K:passive"),
    "D": ("Diode", "1N4148W", "75V 0.15A Fast Switching Diode, SOD-123", "Diode_SMD:D_SOD-123", "1:K:passive 2:A:passive"),
    "NPN": ("Device", "Q_NPN_BCE", "NPN transistor, base/collector/emitter", "Package_TO_SOT_THT:TO-220-3_Vertical", "1:B:input 2:C:passive 3:E:passive"),
    "PNP": ("Device", "Q_PNP_BCE", "PNP transistor, base/collector/emitter", "Package_TO_SOT_THT:TO-220-3_Vertical", "1:B:input 2:C:passive 3:E:passive"),
    "NPN4": ("Device", "Q_NPN_BCEC", "NPN transistor, base/collector/emitter, collector connected to mounting plane", "Package_TO_SOT_SMD:SOT-223", "1:B:input 2:C:passive 3:E:passive 4:C:passive"),
    "BC847": ("Transistor_BJT", "BC847", "0.1A Ic, 45V Vce, NPN Transistor, SOT-23", "Package_TO_SOT_SMD:SOT-23", "1:B:input 2:E:passive 3:C:passive"),
    "BC857": ("Transistor_BJT", "BC857", "0.1A Ic, 45V Vce, PNP Transistor, SOT-23", "Package_TO_SOT_SMD:SOT-23", "1:B:input 2:E:passive 3:C:passive"),
    "BC857BS": ("Transistor_BJT", "BC857BS", "100mA IC, 45V Vce, Dual PNP/PNP Transistors, SOT-363", "Package_TO_SOT_SMD:SOT-363_SC-70-6", "1:E1:passive 2:B1:input 3:C2:passive 4:E2:passive 5:B2:input 6:C1:passive"),
    "NPN_PAIR": ("greenhouse", "NPN_PAIR", "Dual NPN transistor, SOT-363", "Package_TO_SOT_SMD:SOT-363_SC-70-6", "1:E:passive 2:B:input 3:C:passive 4:E:passive 5:B:input 6:C:passive"),
    "NMOS": ("Device", "Q_NMOS_GDS", "N-MOSFET transistor, gate/drain/source", "Package_TO_SOT_THT:TO-220-3_Vertical", "1:G:input 2:D:passive 3:S:passive"),
    "PMOS": ("Device", "Q_PMOS_GDSD", "P-MOSFET transistor, gate/drain/source, drain connected to mounting plane", "Package_TO_SOT_SMD:SOT-223", "1:G:input 2:D:passive 3:S:passive 4:D:passive"),
    "SHUNT25": ("Reference_Voltage", "LM4040DBZ-2.5", "2.500V Precision Micropower Shunt Voltage Reference, SOT-23", "Package_TO_SOT_SMD:SOT-23", "1:K:passive 2:A:passive"),
    "SHUNT50": ("Reference_Voltage", "LM4040DBZ-5", "5.000V Precision Micropower Shunt Voltage Reference, SOT-23", "Package_TO_SOT_SMD:SOT-23", "1:K:passive 2:A:passive"),
    "OPAMP": ("greenhouse", "OPAMP_36V", "36 V operational amplifier, SOT-23-5", "Package_TO_SOT_SMD:SOT-23-5", "1:+:input 2:V-:power_in 3:-:input 4::output 5:V+:power_in"),
    "DUAL": ("Amplifier_Operational", "LM358", "Low-Power, Dual Operational Amplifiers, DIP-8/SOIC-8/TO-99-8", "Package_SO:SOIC-8_3.9x4.9mm_P1.27mm", "1::output 2:-:input 3:+:input 4:V-:power_in 5:+:input 6:-:input 7::output 8:V+:power_in"),
    "TL431": ("Reference_Voltage", "TL431DBZ", "Shunt Regulator, SOT-23", "Package_TO_SOT_SMD:SOT-23", "1:K:passive 2:REF:passive 3:A:passive"),
    "L7805": ("Regulator_Linear", "L7805", "Positive 1.5A 35V Linear Regulator, Fixed Output 5V, TO-220/TO-263/TO-252", "Package_TO_SOT_THT:TO-220-3_Vertical", "1:IN:power_in 2:GND:power_in 3:OUT:power_out"),
    "TERM": ("Connector", "Screw_Terminal_01x02", "Generic screw terminal, single row, 01x02", "TerminalBlock:TerminalBlock_bornier-2_P5.08mm", "1:Pin_1:passive 2:Pin_2:passive"),
}


def circuit(title, rail, volts, amps, parts, supply="+18V_RAW", nominal=18.0, others=(), broken=None, force=None):
    """One circuit: its rail with nominal voltage and full load, its supply, other supplies as (net, volts), its parts.

    broken: (part, terminal, side): the pin at which the loop is broken, and whether it drives or receives there.
    force: the net that is forced to count operating points, with its highest voltage and that in regulation.
    """
    return dict(title=title, rail=rail, volts=volts, amps=amps, supply=supply, nominal=nominal, others=list(others),
                broken=broken, force=force, parts=parts)


def r(ref, value, one, other):
    return (ref, "R", value, None, {"1": one, "2": other})


def c(ref, value, one, other):
    return (ref, "C", value, 0.0, {"1": one, "2": other})


def bulk(ref, value, esr, one, other):
    return (ref, "CP", value, esr, {"1": one, "2": other})


def ceramic(ref, value, esr, one, other):
    return (ref, "C", value, esr, {"1": one, "2": other})


def q(ref, symbol, model, base, collector, emitter):
    return (ref, symbol, None, model, {"B": base, "C": collector, "E": emitter})


def pair(ref, symbol, model, one, two):
    """Two transistors in one package, each base, collector, emitter, by the pin numbers of SOT-363."""
    return (ref, symbol, None, model, dict(zip(["2", "6", "1", "5", "3", "4"], [*one, *two])))


def m(ref, symbol, model, gate, drain, source):
    return (ref, symbol, None, model, {"G": gate, "D": drain, "S": source})


def d(ref, symbol, value, model, cathode, anode):
    return (ref, symbol, value, model, {"K": cathode, "A": anode})


def op(ref, model, plus, minus, out, upper, lower="GND"):
    return (ref, "OPAMP", "OPA 36V", model, {"+": plus, "-": minus, "4": out, "V+": upper, "V-": lower})


def dual(ref, model, plus, minus, out, upper, lower="GND"):
    """A dual op-amp whose second unit rests as a follower of ground."""
    return (ref, "DUAL", "LM358", model,
            {"3": plus, "2": minus, "1": out, "V+": upper, "V-": lower, "5": "GND", "6": "IDLE", "7": "IDLE"})


RAW, NEG = "+18V_RAW", "-18V_RAW"

CIRCUITS = {
    "darlington_op": circuit(
        "Vent motors, 12 V", "+12V", 12.0, 0.8, [
            q("Q1", "NPN", "power_npn", "E2", RAW, "+12V"), q("Q2", "NPN4", "medium_npn", "B", RAW, "E2"),
            op("U1", "op_wide", "REF", "FB", "DRV", RAW), d("D1", "ZENER", "5V1", "zener51", "REF", "GND"),
            r("R1", "2k2", RAW, "REF"), r("R2", "100", "DRV", "B"), r("R3", "27k", "+12V", "FB"), r("R4", "20k", "FB", "GND"),
            r("R5", "1k", "E2", "+12V"), c("C1", "100n", "REF", "GND"), bulk("C2", "47u", 0.25, "+12V", "GND"),
        ], broken=("U1", "4", "drives")),
    "limit_op": circuit(
        "Door actuators, 10 V, with a current limit", "+10V", 10.0, 0.4, [
            q("Q1", "NPN", "power_npn", "B", RAW, "SNS"), q("Q2", "BC847", "small_npn", "SNS", "B", "+10V"),
            op("U1", "op_wide", "REF", "FB", "DRV", RAW), d("D1", "SHUNT25", "LM4040DBZ-2.5", "shunt25", "REF", "GND"),
            r("R1", "4k7", RAW, "REF"), r("R2", "470", "DRV", "B"), r("R3", "30k", "+10V", "FB"), r("R4", "10k", "FB", "GND"),
            r("R5", "1R0", "SNS", "+10V"), c("C1", "100n", "REF", "GND"), bulk("C2", "47u", 0.3, "+10V", "GND"),
        ], broken=("U1", "4", "drives")),
    "sziklai_op": circuit(
        "Moisture probes, 9 V", "+9V", 9.0, 0.5, [
            q("Q1", "PNP", "power_pnp", "CB", "+9V", RAW), q("Q2", "BC847", "small_npn", "B", "CB", "+9V"),
            op("U1", "op_wide", "REF", "FB", "DRV", RAW), d("D1", "SHUNT25", "LM4040DBZ-2.5", "shunt25", "REF", "GND"),
            r("R1", "4k7", RAW, "REF"), r("R2", "1k", "DRV", "B"), r("R3", "39k", "+9V", "FB"), r("R4", "15k", "FB", "GND"),
            r("R5", "220", RAW, "CB"), c("C1", "100n", "REF", "GND"), bulk("C2", "22u", 0.4, "+9V", "GND"),
            ceramic("C3", "100n", 0.005, "+9V", "GND"),
        ], broken=("U1", "4", "drives")),
    "level_op": circuit(
        "Dosing pumps, 10 V, common-emitter pass", "+10V", 10.0, 0.4, [
            q("Q1", "PNP", "power_pnp", "BP", "+10V", RAW), q("Q2", "BC847", "small_npn", "BN", "CN", "EN"),
            dual("U1", "op_wide", "FBI", "FB", "DRV", RAW), d("D1", "SHUNT50", "LM4040DBZ-5", "shunt50", "REF", "GND"),
            r("R1", "3k3", RAW, "REF"), r("R2", "4k7", "DRV", "BN"), r("R3", "30k", "+10V", "FB"), r("R4", "10k", "FB", "GND"),
            r("R5", "330", "CN", "BP"), r("R6", "220", "EN", "GND"), r("R7", "1k", RAW, "BP"), r("R8", "10k", "REF", "FBI"),
            r("R9", "10k", "FBI", "GND"), c("C1", "100n", "REF", "GND"), bulk("C2", "100u", 0.15, "+10V", "GND"),
            c("C3", "1n", "DRV", "FB"),
        ], broken=("U1", "1", "drives")),
    "pair_pnp": circuit(
        "Lamp dimmer bias, 10 V, transistor pair", "+10V", 10.0, 0.12, [
            q("Q1", "PNP", "medium_pnp", "DRV", "+10V", RAW), q("Q2", "BC847", "small_npn", "REF", "DRV", "TAIL"),
            q("Q3", "BC847", "small_npn", "FB", RAW, "TAIL"), d("D1", "ZENER3", "BZX84C5V1", "zener51", "REF", "GND"),
            r("R1", "2k2", RAW, "REF"), r("R2", "1k", RAW, "DRV"), r("R3", "4k7", "+10V", "FB"), r("R4", "4k99", "FB", "GND"),
            r("R5", "1k5", "TAIL", "GND"), c("C1", "100n", "REF", "GND"), bulk("C2", "100u", 0.3, "+10V", "GND"),
        ], broken=("Q1", "B", "receives")),
    "pair_npn": circuit(
        "Irrigation clock, 5 V, pair and Darlington follower", "+5V", 5.0, 0.5, [
            q("Q1", "NPN", "power_npn", "E4", RAW, "+5V"), q("Q4", "BC847", "small_npn", "DRV", RAW, "E4"),
            q("Q2", "BC847", "small_npn", "REF", RAW, "TAIL"), q("Q3", "BC847", "small_npn", "FB", "DRV", "TAIL"),
            d("D1", "SHUNT25", "LM4040DBZ-2.5", "shunt25", "REF", "GND"), r("R1", "6k8", RAW, "REF"), r("R2", "8k2", RAW, "DRV"),
            r("R3", "4k7", "+5V", "FB"), r("R4", "4k7", "FB", "GND"), r("R5", "820", "TAIL", "GND"), r("R6", "1k", "E4", "+5V"),
            c("C1", "10n", "REF", "GND"), c("C3", "100p", "DRV", "FB"), bulk("C2", "22u", 0.25, "+5V", "GND"),
        ], broken=("Q4", "B", "receives")),
    "pair_mirror": circuit(
        "Data logger, 12 V, pair with mirror", "+12V", 12.0, 0.08, [
            q("Q1", "PNP", "medium_pnp", "DRV", "+12V", RAW),
            pair("Q2", "NPN_PAIR", "small_npn", ("REF", "DRV", "TAIL"), ("FB", "MIR", "TAIL")),
            pair("Q3", "BC857BS", "small_pnp", ("MIR", "MIR", RAW), ("MIR", "DRV", RAW)),
            d("D1", "ZENER", "6V2", "zener62", "REF", "GND"), r("R1", "2k2", RAW, "REF"), r("R3", "4k7", "+12V", "FB"),
            r("R4", "4k99", "FB", "GND"), r("R5", "1k8", "TAIL", "GND"), c("C1", "100n", "REF", "GND"),
            bulk("C2", "100u", 0.5, "+12V", "GND"),
        ], broken=("Q1", "B", "receives")),
    "single_zener": circuit(
        "Shade screens, 12 V, single transistor", "+12V", 12.0, 0.25, [
            q("Q1", "NPN", "power_npn", "DRV", RAW, "+12V"), q("Q2", "BC847", "small_npn", "FB", "DRV", "REF"),
            d("D1", "ZENER", "5V1", "zener51", "REF", "GND"), r("R1", "820", RAW, "DRV"), r("R2", "2k2", "+12V", "REF"),
            r("R3", "5k1", "+12V", "FB"), r("R4", "4k87", "FB", "GND"), c("C1", "1n", "DRV", "GND"),
            bulk("C2", "22u", 0.5, "+12V", "GND"),
        ], broken=("Q1", "B", "receives")),
    "single_be": circuit(
        "Fan tachometers, 5 V, base-emitter reference", "+5V", 5.0, 0.15, [
            q("Q1", "NPN4", "medium_npn", "DRV", RAW, "+5V"), q("Q2", "BC847", "small_npn", "FB", "DRV", "GND"),
            r("R1", "2k2", RAW, "DRV"), r("R3", "6k2", "+5V", "FB"), r("R4", "1k", "FB", "GND"),
            bulk("C2", "10u", 0.3, "+5V", "GND"),
        ], broken=("Q1", "B", "receives")),
    "nmos_high": circuit(
        "Grow lights, 15 V, source follower", "+15V", 15.0, 1.0, [
            m("Q1", "NMOS", "nmos", "G", RAW, "+15V"), op("U1", "op_rail", "REF", "FB", "DRV", "+30V"),
            d("D1", "SHUNT50", "LM4040DBZ-5", "shunt50", "REF", "GND"), r("R1", "8k2", "+30V", "REF"),
            r("R2", "150", "DRV", "G"), r("R3", "20k", "+15V", "FB"), r("R4", "10k", "FB", "GND"),
            c("C1", "100n", "REF", "GND"), bulk("C2", "100u", 0.2, "+15V", "GND"),
        ], others=[("+30V", 30.0)], broken=("U1", "4", "drives")),
    "neg_zener": circuit(
        "Probe amplifiers, -12 V, zener follower", "-12V", 12.0, 0.06, [
            q("Q1", "PNP", "medium_pnp", "B", NEG, "-12V"), d("D1", "ZENER", "13V", "zener13", "GND", "B"),
            r("R1", "820", NEG, "B"), c("C1", "100n", "B", "GND"), bulk("C2", "22u", 0.5, "GND", "-12V"),
        ], supply=NEG, nominal=-18.0),
    "neg_op": circuit(
        "Probe amplifiers, -9 V", "-9V", 9.0, 0.25, [
            q("Q1", "PNP", "power_pnp", "B", NEG, "-9V"), op("U1", "op_split", "REF", "FB", "DRV", "GND", NEG),
            d("D1", "SHUNT25", "LM4040DBZ-2.5", "shunt25", "GND", "REF"), r("R1", "4k7", NEG, "REF"),
            r("R2", "100", "DRV", "B"), r("R3", "39k", "-9V", "FB"), r("R4", "15k", "FB", "GND"),
            c("C1", "100n", "REF", "GND"), bulk("C2", "22u", 0.35, "GND", "-9V"),
        ], supply=NEG, nominal=-18.0, broken=("U1", "4", "drives")),
    "neg_weigh": circuit(
        "Probe bridges, -12 V, weighed against a positive reference", "-12V", 12.0, 0.15, [
            q("Q1", "PNP", "medium_pnp", "B", NEG, "-12V"), op("U1", "op_split", "GND", "FB", "DRV", "+18V", NEG),
            d("D1", "SHUNT50", "LM4040DBZ-5", "shunt50", "REF", "GND"), r("R1", "3k3", "+18V", "REF"),
            r("R2", "220", "DRV", "B"), r("R3", "24k", "-12V", "FB"), r("R4", "10k", "REF", "FB"),
            c("C1", "100n", "REF", "GND"), bulk("C2", "10u", 0.6, "GND", "-12V"),
        ], supply=NEG, nominal=-18.0, others=[("+18V", 18.0)], broken=("U1", "4", "drives")),
    "neg_pair": circuit(
        "Probe bias, -10 V, transistor pair", "-10V", 10.0, 0.1, [
            q("Q1", "NPN4", "medium_npn", "DRV", "-10V", NEG), q("Q2", "BC857", "small_pnp", "REF", "DRV", "TAIL"),
            q("Q3", "BC857", "small_pnp", "FB", NEG, "TAIL"), d("D1", "ZENER", "5V1", "zener51", "GND", "REF"),
            r("R1", "2k2", NEG, "REF"), r("R2", "1k", NEG, "DRV"), r("R3", "4k7", "-10V", "FB"), r("R4", "4k99", "FB", "GND"),
            r("R5", "1k5", "TAIL", "GND"), c("C1", "100n", "REF", "GND"), bulk("C2", "100u", 0.3, "GND", "-10V"),
        ], supply=NEG, nominal=-18.0, broken=("Q1", "B", "receives")),
    "buffer_op": circuit(
        "Light sensors, 5 V, buffered and divided reference", "+5V", 5.0, 0.15, [
            q("Q1", "NPN4", "medium_npn", "B", RAW, "+5V"),
            ("U1", "DUAL", "LM358", "op_wide", {"3": "PART", "2": "FB", "1": "DRV", "V+": RAW, "V-": "GND",
                                                "5": "REF", "6": "BUF", "7": "BUF"}),
            d("D1", "SHUNT25", "LM4040DBZ-2.5", "shunt25", "REF", "GND"), r("R1", "8k2", RAW, "REF"),
            r("R2", "150", "DRV", "B"), r("R3", "30k", "+5V", "FB"), r("R4", "10k", "FB", "GND"),
            r("R5", "10k", "BUF", "PART"), r("R6", "10k", "PART", "GND"), c("C1", "10n", "REF", "GND"),
            c("C3", "100n", "PART", "GND"), bulk("C2", "10u", 0.5, "+5V", "GND"),
        ], broken=("U1", "1", "drives")),
    "shunt_npn": circuit(
        "Valve coils, 12 V, programmable shunt", "+12V", 12.0, 0.2, [
            q("Q1", "NPN", "power_npn", "DRV", RAW, "+12V"),
            ("U1", "TL431", "TL431DBZ", None, {"K": "DRV", "A": "GND", "REF": "FB"}),
            r("R1", "820", RAW, "DRV"), r("R3", "38k3", "+12V", "FB"), r("R4", "10k", "FB", "GND"),
            bulk("C2", "47u", 0.3, "+12V", "GND"),
        ]),
    "shunt_pmos": circuit(
        "Circulation pump, 15 V, programmable shunt and P-channel pass", "+15V", 15.0, 0.5, [
            m("Q1", "PMOS", "pmos", "G", "+15V", RAW), q("Q2", "BC847", "small_npn", "BN", "G", "GND"),
            ("U1", "TL431", "TL431DBZ", None, {"K": "DRV", "A": "GND", "REF": "FB"}),
            r("R1", "2k2", RAW, "DRV"), r("R2", "2k2", RAW, "G"), r("R3", "100k", "+15V", "FB"), r("R4", "20k", "FB", "GND"),
            r("R5", "10k", "DRV", "BN"), r("R6", "3k3", "BN", "GND"), c("C1", "10n", "DRV", "FB"),
            bulk("C2", "47u", 0.3, "+15V", "GND"),
        ]),
    "outboard": circuit(
        "Display backlight, 5 V, packaged regulator with outboard transistor", "+5V", 5.0, 1.5, [
            ("U1", "L7805", "L7805", None, {"IN": "IN", "GND": "GND", "OUT": "+5V"}),
            q("Q1", "PNP", "power_pnp", "IN", "+5V", RAW), r("R1", "6R8", RAW, "IN"),
            c("C1", "330n", "IN", "GND"), bulk("C2", "47u", 0.3, "+5V", "GND"),
        ]),
    "boot_pair": circuit(
        "Radio module, 12 V, pair with reference from the output", "+12V", 12.0, 0.1, [
            q("Q1", "PNP", "medium_pnp", "DRV", "+12V", RAW), q("Q2", "BC847", "small_npn", "REF", "DRV", "TAIL"),
            q("Q3", "BC847", "small_npn", "FB", RAW, "TAIL"), d("D1", "ZENER", "6V2", "zener62", "REF", "GND"),
            r("R1", "1k2", "+12V", "REF"), r("R2", "1k", RAW, "DRV"), r("R3", "4k7", "+12V", "FB"), r("R4", "4k99", "FB", "GND"),
            r("R5", "1k5", "TAIL", "GND"), c("C1", "10n", "REF", "GND"), bulk("C2", "47u", 0.4, "+12V", "GND"),
        ], broken=("Q1", "B", "receives"), force=("REF", 8.0, 6.2)),
    "boot_diodes": circuit(
        "Night lamps, 5 V, Darlington pass with bleeders, reference of two diodes from the output", "+5V", 5.0, 0.2, [
            q("Q1", "PNP", "power_pnp", "E4", "+5V", RAW), q("Q4", "BC857", "small_pnp", "DRV", "GND", "E4"),
            q("Q2", "BC847", "small_npn", "REF", "DRV", "TAIL"), q("Q3", "BC847", "small_npn", "FB", RAW, "TAIL"),
            d("D1", "D", "1N4148W", "diode", "MID", "REF"), d("D2", "D", "1N4148W", "diode", "GND", "MID"),
            r("R1", "2k2", "+5V", "REF"), r("R2", "4k7", "E4", "DRV"), r("R3", "27k", "+5V", "FB"), r("R4", "10k", "FB", "GND"),
            r("R5", "470", "TAIL", "GND"), r("R6", "1k", RAW, "E4"), bulk("C2", "100u", 0.2, "+5V", "GND"),
        ], broken=("Q4", "B", "receives"), force=("REF", 2.0, 1.35)),
    "boot_npn": circuit(
        "Controller core, 5 V, follower with reference from the output", "+5V", 5.0, 0.3, [
            q("Q1", "NPN", "power_npn", "B", RAW, "+5V"), op("U1", "op_wide", "REF", "FB", "DRV", RAW),
            d("D1", "SHUNT25", "LM4040DBZ-2.5", "shunt25", "REF", "GND"), r("R1", "1k", "+5V", "REF"),
            r("R2", "68", "DRV", "B"), r("R3", "12k", "+5V", "FB"), r("R4", "12k", "FB", "GND"),
            c("C1", "10n", "REF", "GND"), bulk("C2", "22u", 0.3, "+5V", "GND"),
        ], broken=("U1", "4", "drives"), force=("REF", 4.0, 2.5)),
    "high_room": circuit(
        "Heater relays, 10 V, op-amp that cannot reach the gate's threshold", "+10V", 10.0, 0.6, [
            m("Q1", "PMOS", "pmos", "G", "+10V", RAW), op("U1", "op_high", "FB", "REF", "DRV", RAW),
            d("D1", "SHUNT25", "LM4040DBZ-2.5", "shunt25", "REF", "GND"), r("R1", "2k7", "+10V", "REF"),
            r("R2", "100", "DRV", "G"), r("R3", "30k", "+10V", "FB"), r("R4", "10k", "FB", "GND"),
            c("C1", "10n", "REF", "GND"), bulk("C2", "22u", 0.6, "+10V", "GND"),
        ], broken=("U1", "4", "drives"), force=("REF", 4.0, 2.5)),
}


def with_parts(name, title, more):
    own = CIRCUITS[name]
    return dict(own, title=title, parts=own["parts"] + more)


CIRCUITS["boot_pair_su"] = with_parts(
    "boot_pair", "Radio module, 12 V, pair with reference from the output and start-up resistor",
    [r("R6", "12k", RAW, "REF")])
CIRCUITS["boot_npn_su"] = with_parts(
    "boot_npn", "Controller core, 5 V, follower with reference from the output and start-up branch",
    [r("R5", "33k", RAW, "SU"), d("D2", "D", "1N4148W", "diode", "REF", "SU")])

# Board files beside NAME.railworthy.toml: the offset of the op-amp in place of the model's.
OFFSETS = {
    "boot_npn": {"": "-0.004..0.004", "ref-4mV": "-0.004", "ref0": "0", "ref+4mV": "0.004"},
    "boot_npn_su": {"": "-0.004..0.004", "ref-4mV": "-0.004", "ref0": "0", "ref+4mV": "0.004"},
}
