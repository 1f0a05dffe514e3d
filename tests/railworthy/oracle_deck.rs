//! A small reader of simulator decks, for circuits that a simulator and the solver both work on.

use std::collections::BTreeMap;

use railworthy::solve::{
    Bipolar, Capacitor, Circuit, DeviceId, Diode, GROUND, Mosfet, Node, OpAmp, Polarity, Resistor, VoltageSource,
};

/// A circuit read from a deck, with its nodes and devices by name.
#[derive(Debug, Clone)]
pub(crate) struct Deck {
    pub(crate) circuit: Circuit,
    nodes: BTreeMap<String, Node>,
    devices: BTreeMap<String, DeviceId>,
}

/// A number with one of the simulator's suffixes.
fn number(text: &str) -> f64 {
    let text = text.to_ascii_lowercase();
    let digits = text.trim_end_matches(|letter: char| letter.is_ascii_alphabetic() && letter != 'e');
    let factor = match &text[digits.len()..] {
        "" => 1.0,
        "f" => 1e-15,
        "p" => 1e-12,
        "n" => 1e-9,
        "u" => 1e-6,
        "m" => 1e-3,
        "k" => 1e3,
        "meg" => 1e6,
        other => panic!("suffix {other}"),
    };
    digits.parse::<f64>().unwrap() * factor
}

/// The parameters of each `.model`.
fn models(text: &str) -> BTreeMap<String, (String, BTreeMap<String, f64>)> {
    let lines = text.lines().filter_map(|line| line.strip_prefix(".model "));
    lines
        .map(|line| {
            let (name, rest) = line.split_once(' ').unwrap();
            let (kind, rest) = rest.split_once('(').unwrap();
            let parameters = rest.trim_end_matches(')').split_whitespace();
            let parameters = parameters.map(|word| word.split_once('=').unwrap());
            let parameters = parameters.map(|(name, value)| (name.to_owned(), number(value))).collect();
            (name.to_owned(), (kind.to_owned(), parameters))
        })
        .collect()
}

/// The op-amp of a deck, which a comment states in words.
fn op_amp(text: &str) -> OpAmp {
    let line = text.lines().find(|line| line.starts_with("* op-amp: ")).unwrap();
    let after = |word: &str| {
        let rest = line.split_once(word).unwrap().1.trim_start();
        number(rest.split([' ', ',']).next().unwrap())
    };
    OpAmp {
        gain: after("A0 "),
        bandwidth: after("GBW "),
        slew_rate: after("slew "),
        offset: 0.0,
        top: after("top headroom "),
        bottom: after("bottom headroom "),
        output_resistance: after("Ro "),
    }
}

type Parameters = BTreeMap<String, f64>;

fn value(parameters: &Parameters, name: &str, default: f64) -> f64 {
    parameters.get(name).copied().unwrap_or(default)
}

fn diode(of: &Parameters) -> Diode {
    let default = Diode::default();
    Diode {
        saturation_current: value(of, "IS", default.saturation_current),
        emission: value(of, "N", default.emission),
        series_resistance: value(of, "RS", default.series_resistance),
        breakdown_voltage: value(of, "BV", default.breakdown_voltage),
        breakdown_current: value(of, "IBV", default.breakdown_current),
        breakdown_emission: value(of, "NBV", default.breakdown_emission),
        capacitance: value(of, "CJO", default.capacitance),
        transit_time: value(of, "TT", default.transit_time),
    }
}

fn bipolar(of: &Parameters) -> Bipolar {
    Bipolar {
        saturation_current: of["IS"],
        forward_gain: of["BF"],
        reverse_gain: of["BR"],
        early_voltage: of["VAF"],
        knee_current: of["IKF"],
        leakage_current: of["ISE"],
        leakage_emission: of["NE"],
        base_resistance: of["RB"],
        collector_resistance: of["RC"],
        emitter_resistance: of["RE"],
        emitter_capacitance: of["CJE"],
        collector_capacitance: of["CJC"],
        forward_transit: of["TF"],
        reverse_transit: of["TR"],
        ..Bipolar::new(Polarity::N)
    }
}

fn mosfet(of: &Parameters) -> Mosfet {
    Mosfet {
        threshold: of["VTO"],
        transconductance: of["KP"],
        modulation: of["LAMBDA"],
        drain_resistance: of["RD"],
        source_resistance: of["RS"],
        saturation_current: of["IS"],
        ..Mosfet::new(Polarity::P)
    }
}

impl Deck {
    /// Reads a deck; elements whose names begin with one of `without` are left out.
    pub(crate) fn read(text: &str, without: &[&str]) -> Self {
        let mut deck = Self { circuit: Circuit::new(), nodes: BTreeMap::new(), devices: BTreeMap::new() };
        let models = models(text);
        let elements = text.lines().skip(1).take_while(|line| !line.starts_with(".control"));
        let mut in_subcircuit = false;
        for line in elements {
            in_subcircuit = line.starts_with(".subckt") || (in_subcircuit && !line.starts_with(".ends"));
            let words: Vec<&str> = line.split_whitespace().collect();
            let is_element = line.starts_with(|first: char| first.is_ascii_alphabetic());
            if in_subcircuit || !is_element || without.iter().any(|name| words[0] == *name) {
                continue;
            }
            deck.element(&words, &models, text);
        }
        deck
    }

    fn element(&mut self, words: &[&str], models: &BTreeMap<String, (String, Parameters)>, text: &str) {
        let name = words[0];
        let on = |deck: &mut Self, places: &[usize]| -> Vec<Node> {
            places.iter().map(|place| deck.node_or_new(words[*place])).collect()
        };
        let model = |place: usize| &models[words[place]].1;
        let added = match name.chars().next().unwrap() {
            'R' => {
                let nodes = on(self, &[1, 2]);
                self.circuit.add(name, &nodes, Resistor { ohms: number(words[3]) })
            }
            'C' => {
                let nodes = on(self, &[1, 2]);
                self.circuit.add(name, &nodes, Capacitor { farads: number(words[3]), esr: 0.0 })
            }
            'V' => {
                let nodes = on(self, &[1, 2]);
                let volts = if words[3] == "DC" { number(words[4]) } else { 0.0 };
                self.circuit.add(name, &nodes, VoltageSource { volts })
            }
            'D' => {
                let nodes = on(self, &[1, 2]);
                self.circuit.add(name, &nodes, diode(model(3)))
            }
            'Q' => {
                let nodes = on(self, &[1, 2, 3]);
                self.circuit.add(name, &nodes, bipolar(model(4)))
            }
            'M' => {
                let nodes = on(self, &[1, 2, 3]);
                self.circuit.add(name, &nodes, mosfet(model(5)))
            }
            'X' => {
                let nodes = on(self, &[1, 2, 3, 4, 5]);
                self.circuit.add(name, &nodes, op_amp(text))
            }
            // The injection of a current into a loop is the solver's own affair.
            'I' => return,
            other => panic!("element {other}"),
        };
        self.devices.insert(name.to_owned(), added.unwrap());
    }

    fn node_or_new(&mut self, name: &str) -> Node {
        if name == "0" {
            return GROUND;
        }
        let circuit = &mut self.circuit;
        *self.nodes.entry(name.to_owned()).or_insert_with(|| circuit.node(name))
    }

    pub(crate) fn node(&self, name: &str) -> Node {
        self.nodes[name]
    }

    pub(crate) fn device(&self, name: &str) -> DeviceId {
        self.devices[name]
    }

    /// Gives a resistor or voltage source another value, as the simulator's `alter` does.
    pub(crate) fn alter(&mut self, name: &str, value: f64) {
        let (own, id) = self.devices.iter().find(|(own, _)| own.eq_ignore_ascii_case(name)).unwrap();
        match own.chars().next().unwrap() {
            'R' => self.circuit.replace(*id, Resistor { ohms: value }),
            'V' => self.circuit.replace(*id, VoltageSource { volts: value }),
            'C' => self.circuit.replace(*id, Capacitor { farads: value, esr: 0.0 }),
            other => panic!("element {other}"),
        }
        .unwrap();
    }
}
