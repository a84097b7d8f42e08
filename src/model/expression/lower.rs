//! From the text of an expression to a node of the graph.

use meval::shunting_yard::to_rpn;
use meval::tokenizer::{self, Operation, ParseError, Token as Parsed, tokenize};

use super::functions::{FUNCTIONS, call};
use super::lex::{Kind, Token, lex};
use crate::fault::{Fault, Faults, Span, nearest};
use crate::model::graph::{Binary, Graph, NodeId, Unary};
use crate::study::Text;

/// Longest text of an expression.
const LONGEST: usize = 64 * 1024;

/// What the names in an expression mean.
pub trait Scope {
    /// The node of a name; `None` where it is not known here.
    fn look_up(&self, graph: &mut Graph, name: &str) -> Option<NodeId>;
    /// All names known here.
    fn names(&self) -> Vec<&str>;
    /// Why a name that is known elsewhere may not be used here, if that is so.
    fn not_here(&self, name: &str) -> Option<String>;
}

/// A node with the first and last token of its text.
type Part = (NodeId, usize, usize);

/// Adds the expression to the graph. `None` with faults where something is wrong.
pub fn lower(text: &Text, graph: &mut Graph, scope: &dyn Scope, faults: &mut Faults) -> Option<NodeId> {
    let source = text.value.as_str();
    if source.trim().is_empty() {
        faults.add(Fault::error("empty-expression", text.at, "an expression is missing here"));
        return None;
    }
    if source.len() > LONGEST {
        faults.add(
            Fault::error(
                "long-expression",
                text.part(0, 40),
                format!("this expression has {} bytes", source.len()),
            )
            .help(format!("at most {LONGEST} are read: split it into derived quantities")),
        );
        return None;
    }
    let tokens = lex(text, faults)?;
    let rpn = parse(text, faults)?;
    let before = faults.errors();
    let mut operands = (0..tokens.len()).filter(|i| {
        let call = tokens.get(i + 1).is_some_and(|next| next.kind == Kind::Open);
        tokens[*i].kind == Kind::Number || (tokens[*i].kind == Kind::Name && !call)
    });
    let mut stack: Vec<Part> = Vec::new();
    for token in &rpn {
        let part = match token {
            Parsed::Number(number) => {
                let place = operands.next()?;
                check_number(text, &tokens[place], *number, faults);
                (graph.constant(*number), place, place)
            }
            Parsed::Var(name) => {
                let place = operands.next()?;
                let at = text.part(tokens[place].start, tokens[place].end);
                let node = look_up(name, at, graph, scope, faults).unwrap_or_else(|| graph.constant(1.0));
                (node, place, place)
            }
            Parsed::Unary(operation) => {
                let (a, first, last) = stack.pop()?;
                let operator = (0..first).rev().find(|i| tokens[*i].kind == Kind::Operator)?;
                let last = out_to(&tokens, last, tokens[operator].level, false);
                let node = if *operation == Operation::Minus { graph.unary(Unary::Negate, a) } else { a };
                (node, operator, last)
            }
            Parsed::Binary(operation) => {
                let (b, b_first, b_last) = stack.pop()?;
                let (a, first, last) = stack.pop()?;
                let operator = (last + 1..b_first).find(|i| tokens[*i].kind == Kind::Operator)?;
                let level = tokens[operator].level;
                let node = graph.binary(binary(*operation), a, b);
                (node, out_to(&tokens, first, level, true), out_to(&tokens, b_last, level, false))
            }
            Parsed::Func(name, count) => {
                let count = (*count)?;
                let arguments = stack.split_off(stack.len().checked_sub(count)?);
                let (first, last) = call_range(source, &tokens, name, arguments.first()?.1)?;
                let at = text.part(tokens[first].start, tokens[last].end);
                let nodes: Vec<NodeId> = arguments.iter().map(|(node, ..)| *node).collect();
                let node = function(
                    name,
                    count,
                    &nodes,
                    text.part(tokens[first].start, tokens[first].end),
                    at,
                    graph,
                    faults,
                )
                .unwrap_or_else(|| graph.constant(1.0));
                (node, first, last)
            }
            Parsed::LParen | Parsed::RParen | Parsed::Comma => return None,
        };
        let (from, to) = (tokens[part.1].start, tokens[part.2].end);
        graph.set_origin(part.0, text.part(from, to), &source[from..to]);
        stack.push(part);
    }
    if faults.errors() > before {
        return None;
    }
    stack.pop().map(|(node, ..)| node)
}

/// Parses by `meval`. Only its token list is used.
fn parse(text: &Text, faults: &mut Faults) -> Option<Vec<Parsed>> {
    let source = text.value.as_str();
    let end = source.len();
    // The parser is known to panic on blank text alone, which is refused before; the guard is for the unknown.
    let parsed = std::panic::catch_unwind(|| tokenize(source).map(|tokens| to_rpn(&tokens)));
    let fault = match parsed {
        Ok(Ok(Ok(rpn))) => return Some(rpn),
        Ok(Err(ParseError::UnexpectedToken(at))) => {
            Fault::error("syntax", text.part(at, at + 1), "the expression cannot go on like this")
        }
        Ok(Err(tokenizer::ParseError::MissingArgument)) => {
            Fault::error("syntax", text.part(end.saturating_sub(1), end), "something is missing at the end")
                .help("an operator needs a value on its right")
        }
        Ok(Err(tokenizer::ParseError::MissingRParen(_))) => Fault::error(
            "parenthesis",
            text.part(end.saturating_sub(1), end),
            "a closing parenthesis is missing",
        ),
        Ok(Ok(Err(_))) | Err(_) => Fault::error("syntax", text.at, "the expression cannot be read"),
    };
    faults.add(fault);
    None
}

fn binary(operation: Operation) -> Binary {
    match operation {
        Operation::Plus => Binary::Add,
        Operation::Minus => Binary::Subtract,
        Operation::Times => Binary::Multiply,
        Operation::Div => Binary::Divide,
        Operation::Rem => Binary::Remainder,
        Operation::Pow => Binary::Power,
    }
}

/// From a token outward over its parentheses until `level`.
fn out_to(tokens: &[Token], mut place: usize, level: u32, left: bool) -> usize {
    while tokens[place].level > level {
        let Some(open) = tokens[place].open else {
            break;
        };
        place = if left { open } else { tokens[open].close };
    }
    place
}

/// The range of tokens of a call whose first argument starts at token `inside`.
fn call_range(source: &str, tokens: &[Token], name: &str, inside: usize) -> Option<(usize, usize)> {
    let mut open = tokens[inside].open?;
    loop {
        if let Some(before) = open.checked_sub(1) {
            let token = tokens[before];
            if token.kind == Kind::Name && &source[token.start..token.end] == name {
                return Some((before, tokens[open].close));
            }
        }
        open = tokens[open].open?;
    }
}

fn check_number(text: &Text, token: &Token, number: f64, faults: &mut Faults) {
    let digits = &text.value[token.start..token.end];
    let at = text.part(token.start, token.end);
    if !number.is_finite() {
        faults.add(Fault::error(
            "number-too-large",
            at,
            format!("`{digits}` is beyond the largest number, about 1.8e308"),
        ));
    } else if number == 0.0
        && digits.split(['e', 'E']).next().is_some_and(|m| m.contains(|c| ('1'..='9').contains(&c)))
    {
        faults.add(Fault::error(
            "number-too-small",
            at,
            format!("`{digits}` is below the smallest number, about 5e-324"),
        ));
    }
}

fn look_up(
    name: &str,
    at: Span,
    graph: &mut Graph,
    scope: &dyn Scope,
    faults: &mut Faults,
) -> Option<NodeId> {
    if let Some(node) = scope.look_up(graph, name) {
        return Some(node);
    }
    let builtin = match name {
        "pi" => Some(std::f64::consts::PI),
        "e" => Some(std::f64::consts::E),
        _ => None,
    };
    if let Some(value) = builtin {
        return Some(graph.constant(value));
    }
    let mut fault = Fault::error("unknown-name", at, format!("there is no `{name}` here"));
    if let Some(why) = scope.not_here(name) {
        fault = Fault::error("name-not-allowed", at, format!("`{name}` may not be used here")).help(why);
    } else if super::is_function(name) {
        fault = fault.help(format!("`{name}` is a function: `{name}(x)`"));
    } else {
        let near = nearest(name, scope.names());
        if near.is_empty() {
            let mut names = scope.names();
            let more = if names.len() > 12 { ", ..." } else { "" };
            names.truncate(12);
            fault = fault.help(format!("known here: {}{more}", names.join(", ")));
        } else {
            let list: Vec<String> = near.iter().map(|near| format!("`{near}`")).collect();
            fault = fault.help(format!("did you mean {}?", list.join(" or ")));
        }
    }
    faults.add(fault);
    None
}

fn function(
    name: &str,
    count: usize,
    arguments: &[NodeId],
    at_name: Span,
    at: Span,
    graph: &mut Graph,
    faults: &mut Faults,
) -> Option<NodeId> {
    let Some((_, least, most)) = FUNCTIONS.iter().find(|(function, ..)| *function == name) else {
        let near = nearest(name, FUNCTIONS.iter().map(|(function, ..)| *function));
        let help = match (name, near.first()) {
            ("log", _) => "write `ln` for the natural and `log10` for the decimal logarithm".to_owned(),
            ("sign" | "sgn", _) => "write `signum`".to_owned(),
            (_, Some(near)) => format!("did you mean `{near}`?"),
            _ => "products are written with `*`: `a*(b + c)`".to_owned(),
        };
        faults.add(
            Fault::error("unknown-function", at_name, format!("there is no function `{name}`")).help(help),
        );
        return None;
    };
    if count < *least || count > *most {
        let wanted = if least == most { least.to_string() } else { format!("{least} to {most}") };
        faults.add(Fault::error(
            "wrong-arguments",
            at,
            format!("`{name}` takes {wanted} argument{}, not {count}", if *most == 1 { "" } else { "s" }),
        ));
        return None;
    }
    call(graph, name, arguments, at)
}
