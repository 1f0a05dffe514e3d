//! A circuit as a plain description: nodes, and devices between them.

use std::fmt::Debug;
use std::sync::Arc;

use super::SolveError;
use super::stamps::{At, MOST_LOCAL, Stamps};

/// A node of a circuit.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Node(usize);

/// The node that every voltage is measured against.
pub const GROUND: Node = Node(0);

impl Node {
    pub(super) fn at(number: usize) -> Self {
        Self(number)
    }

    pub(super) fn number(self) -> usize {
        self.0
    }
}

/// A device of a circuit.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct DeviceId(usize);

impl DeviceId {
    pub(super) fn at(number: usize) -> Self {
        Self(number)
    }

    pub(super) fn number(self) -> usize {
        self.0
    }
}

/// The model of a device. A new one is a file in `models/` and a line in its list.
///
/// Its unknowns are numbered by itself: terminals first, then inner nodes, then branch currents.
pub trait Device: Debug + Send + Sync {
    /// How many nodes it lies between.
    fn terminals(&self) -> usize;

    /// How many nodes it has inside.
    fn inner_nodes(&self) -> usize {
        0
    }

    /// How many currents it has as unknowns, each with an equation of its own.
    fn branches(&self) -> usize {
        0
    }

    /// How many junction voltages it wants remembered from one iteration to the next.
    fn junctions(&self) -> usize {
        0
    }

    /// Whether its stamps are the same at every voltage but for proportion.
    fn is_linear(&self) -> bool {
        false
    }

    /// The level of an independent source, in volts or amperes; none for anything else.
    fn level(&self) -> Option<f64> {
        None
    }

    /// Its currents and charges at given voltages.
    fn stamp(&self, at: &mut At<'_>, stamps: &mut Stamps);

    /// Why its parameters cannot be, if they cannot.
    ///
    /// # Errors
    /// What is wrong, as a sentence without its subject.
    fn check(&self) -> Result<(), &'static str>;
}

/// A device where it stands.
#[derive(Debug, Clone)]
pub(super) struct Placed {
    pub(super) name: String,
    pub(super) nodes: Vec<Node>,
    pub(super) device: Arc<dyn Device>,
}

/// Nodes and the devices between them.
#[derive(Debug, Clone)]
pub struct Circuit {
    nodes: Vec<String>,
    devices: Vec<Placed>,
}

impl Default for Circuit {
    fn default() -> Self {
        Self { nodes: vec!["ground".to_owned()], devices: Vec::new() }
    }
}

impl Circuit {
    /// A circuit of ground alone.
    #[must_use]
    pub fn new() -> Self {
        Self::default()
    }

    /// Adds a node; its name is for messages alone.
    pub fn node(&mut self, name: &str) -> Node {
        self.nodes.push(name.to_owned());
        Node(self.nodes.len() - 1)
    }

    /// Adds a device between nodes, in the order that its model states; its name is for messages alone.
    ///
    /// # Errors
    /// Where the number of nodes is not the model's, a node is another circuit's, or a parameter cannot be.
    pub fn add(&mut self, name: &str, nodes: &[Node], device: impl Device + 'static) -> Result<DeviceId, SolveError> {
        self.add_shared(name, nodes, Arc::new(device))
    }

    /// Adds a device that is already shared.
    ///
    /// # Errors
    /// As [`Circuit::add`].
    pub fn add_shared(
        &mut self,
        name: &str,
        nodes: &[Node],
        device: Arc<dyn Device>,
    ) -> Result<DeviceId, SolveError> {
        let known = nodes.iter().all(|node| node.0 < self.nodes.len());
        if nodes.len() != device.terminals() || !known {
            let (wanted, given) = (device.terminals(), nodes.len());
            return Err(SolveError::Terminals { device: name.to_owned(), wanted, given });
        }
        check(name, &*device)?;
        self.devices.push(Placed { name: name.to_owned(), nodes: nodes.to_vec(), device });
        Ok(DeviceId(self.devices.len() - 1))
    }

    /// Puts another device in the place of one.
    ///
    /// # Errors
    /// As [`Circuit::add`].
    pub fn replace(&mut self, id: DeviceId, device: impl Device + 'static) -> Result<(), SolveError> {
        let Some(placed) = self.devices.get_mut(id.0) else {
            return Err(SolveError::UnknownDevice);
        };
        if placed.nodes.len() != device.terminals() {
            let (wanted, given) = (device.terminals(), placed.nodes.len());
            return Err(SolveError::Terminals { device: placed.name.clone(), wanted, given });
        }
        check(&placed.name, &device)?;
        placed.device = Arc::new(device);
        Ok(())
    }

    /// The number of nodes, ground among them.
    #[must_use]
    pub fn node_count(&self) -> usize {
        self.nodes.len()
    }

    /// The name of a node.
    #[must_use]
    pub fn node_name(&self, node: Node) -> &str {
        self.nodes.get(node.0).map_or("", String::as_str)
    }

    /// The level of an independent source, in volts or amperes.
    #[must_use]
    pub fn level(&self, id: DeviceId) -> Option<f64> {
        self.devices.get(id.0)?.device.level()
    }

    pub(super) fn devices(&self) -> &[Placed] {
        &self.devices
    }
}

fn check(name: &str, device: &dyn Device) -> Result<(), SolveError> {
    let local = device.terminals() + device.inner_nodes() + device.branches();
    if local > MOST_LOCAL {
        return Err(SolveError::TooManyLocal { device: name.to_owned(), count: local });
    }
    device.check().map_err(|wrong| SolveError::Parameter { device: name.to_owned(), wrong })
}
