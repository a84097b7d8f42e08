//! The bytes are the text of an expression of one state, one parameter and time.
#![no_main]

use halfstep::fault::{Faults, FileId, Span};
use halfstep::model::expression::{Scope, lower};
use halfstep::model::graph::{Graph, NodeId};
use halfstep::model::program::Program;
use halfstep::study::Text;
use libfuzzer_sys::fuzz_target;

struct Names;

impl Scope for Names {
    fn look_up(&self, graph: &mut Graph, name: &str) -> Option<NodeId> {
        match name {
            "x" => Some(graph.state(0)),
            "a" => Some(graph.parameter(0)),
            "t" => Some(graph.time()),
            _ => None,
        }
    }
    fn names(&self) -> Vec<&str> {
        vec!["a", "t", "x"]
    }
    fn not_here(&self, _name: &str) -> Option<String> {
        None
    }
}

fuzz_target!(|value: String| {
    let at = Span::new(FileId(0), 0, value.len());
    let text = Text { value, at, exact: true };
    let (mut graph, mut faults) = (Graph::default(), Faults::new());
    let node = lower(&text, &mut graph, &Names, &mut faults);
    // A text is either lowered or refused with a fault.
    assert_eq!(node.is_none(), faults.any_error());
    if let Some(node) = node {
        let rate = graph.state(0);
        let along = graph.along(node, &[rate]);
        let program = Program::compile(&graph, &[node, along]);
        program.evaluate(&mut program.registers(&[1.5]), 0.25, &[0.5], &[], &mut [0.0; 2]);
    }
});
