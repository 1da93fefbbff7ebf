//! Runs a flow from its text to its findings.

use std::sync::Arc;

use gapwright::diag::{Diagnostic, Severity};
use gapwright::flow::{self, Flow};
use gapwright::graph::Graph;
use gapwright::library::{self, Library};
use gapwright::rules::{self, Context, Finding};
use gapwright::sim::{self, Grain};
use gapwright::source::Source;
use gapwright::syntax;

/// Resolves a text, with a library file laid over the built-in one.
pub fn resolve(name: &str, text: &str, extra: Option<&str>) -> Flow {
    let mut library = (*Library::built_in()).clone();
    if let Some(yaml) = extra {
        let source = Source::new("page.yaml", yaml);
        let file = library::parse(&source).unwrap_or_else(|d| panic!("{name}: {}", told(&d)));
        library = library.with(file, &source).0;
    }
    let source = Arc::new(Source::new(name, text));
    let (tree, wrong) = syntax::parse(&source);
    let errors: Vec<_> = wrong.into_iter().filter(|d| d.severity == Severity::Error).collect();
    assert!(errors.is_empty(), "{name}: {}", told(&errors));
    match flow::resolve(&tree, source, Arc::new(library)) {
        Ok((flow, _)) => flow,
        Err(errors) => panic!("{name}: {}", told(&errors)),
    }
}

fn told(messages: &[Diagnostic]) -> String {
    messages.iter().map(|d| format!("{} {:?}\n", d.message, d.span)).collect()
}

/// Findings of the unsplit flow at the grain of `check`; the words of the error where it
/// cannot be grown.
pub fn findings(flow: &Flow) -> Result<Vec<Finding>, String> {
    let variant = &flow.variants[0];
    let grown = sim::run(flow, variant, &Grain::default().finer(), &|_, _| {});
    let cells = grown.map_err(|error| error.to_string())?;
    let graph = Graph::of(flow, variant);
    let context = Context::new(flow, variant, &graph, &cells, &[]);
    Ok(rules::finish(flow, &[0], false, rules::check(&context)))
}

/// A finding on one line: severity, rule, operation, site, message.
pub fn line(flow: &Flow, finding: &Finding) -> String {
    let op = finding.step.map_or("-", |step| flow.variants[0].steps[step].op_text.as_str());
    let site = finding.site.as_deref().unwrap_or("everywhere");
    let waived = if finding.waiver.is_some() { "waived " } else { "" };
    format!(
        "{waived}{} {} on {op} at {site}: {}",
        format!("{:?}", finding.severity).to_lowercase(),
        finding.rule,
        finding.message,
    )
}

/// Lines of what is graver than a note.
pub fn grave(flow: &Flow, findings: &[Finding]) -> Vec<String> {
    let grave = findings.iter().filter(|f| f.severity > Severity::Note && f.waiver.is_none());
    grave.map(|finding| line(flow, finding)).collect()
}
