//! What breaks within the tolerances of a flow that holds at its nominal values.
//!
//! Method: every tolerance is taken to both of its ends, one at a time, and what each end takes
//! of a margin is added up as a root of the sum of squares, which for independent normal errors
//! and margins that are linear in them is three standard deviations of the margin. A limit with
//! less margin than that fails. States and rules have no margin; they are judged on grown
//! sections: at every end, and at the corners (points three standard deviations away from the
//! nominal values) towards which the margins that sections are lost by shrink fastest. Corners
//! that nearly coincide are grown once.
//!
//! Cost: two growths a tolerance and one a corner, at the coarser resolution, nominal values
//! included, so that the error of growth mostly cancels in differences; the simulator computes
//! again only the cells and steps that a tolerance reaches. It fails where a margin bends
//! strongly within the tolerances: then a corner between the ends can break that no end and no
//! grown corner shows.

use super::run::{RunError, references};
use crate::diag::Severity;
use crate::flow::{Claim, Flow, Quantity, Tolerance, Variant};
use crate::graph::Graph;
use crate::measure::{Figures, Fineness, Measured, Question, Traces, Wanted};
use crate::rules::{self, Broken, Corner, Finding};
use crate::sim::{CellTrace, Grain, SimError, Simulator};
use crate::verdict::{self, LimitReport};

/// Margins by which sections are lost; a corner is grown towards the least of each.
const MARGINS: &[Quantity] =
    &[Quantity::SealMargin, Quantity::PolishMargin, Quantity::Roof, Quantity::ViaClearance];

/// Cosine from which two directions are one corner.
const SAME_CORNER: f64 = 0.9;

/// A part of a tolerance smaller than this is not told among what moved.
const TOLD: f64 = 0.1;

/// The corners of one variant.
pub(super) struct Corners<'a> {
    /// The flow.
    pub flow: &'a Flow,
    /// The variant, by index.
    pub variant: usize,
    /// What grew the nominal sections.
    pub simulator: &'a Simulator,
    /// Its coarser resolution.
    pub grain: Grain,
    /// Accuracy wanted of the field.
    pub field_accuracy: f64,
}

/// What is seen at one point of the tolerances.
struct View {
    limits: Vec<LimitReport>,
    findings: Vec<Finding>,
    /// The margins of [`MARGINS`], by site.
    margins: Vec<((String, Quantity), f64)>,
}

/// A point of the tolerances: by how much of its three standard deviations each moves.
type Point = Vec<f64>;

impl Corners<'_> {
    /// What breaks; `limits` and `findings` are those of the nominal values.
    pub fn broken(
        &self,
        limits: &[LimitReport],
        findings: &[Finding],
    ) -> Result<Vec<Broken>, RunError> {
        let tolerances = self.flow.tolerances(self.variant);
        if tolerances.is_empty() {
            return Ok(Vec::new());
        }
        let nominal = self.view(self.flow)?;
        let known: Vec<_> = findings.iter().chain(&nominal.findings).collect();
        let mut broken = Broke { corners: self, tolerances: &tolerances, known, all: Vec::new() };
        let mut ends = Vec::with_capacity(tolerances.len());
        for at in 0..tolerances.len() {
            let mut both = Vec::with_capacity(2);
            for part in [-1.0, 1.0] {
                let mut point = vec![0.0; tolerances.len()];
                point[at] = part;
                let seen = self.at(&tolerances, &point, self.flow.clone())?;
                let seen = broken.judge(seen, &point);
                both.extend(seen.map(|view| (part, view)));
            }
            ends.push(both);
        }
        for limit in limits {
            broken.margin(limit, &nominal, &ends);
        }
        for (at, both) in ends.iter().enumerate() {
            for (part, view) in both {
                let mut point = vec![0.0; tolerances.len()];
                point[at] = *part;
                broken.states(&nominal, Some(view), &point);
            }
        }
        let states = Flow {
            limits: self.flow.limits.iter().filter(|l| is_state(&l.claim)).cloned().collect(),
            ..self.flow.clone()
        };
        for point in directions(&nominal, &ends) {
            let seen = self.at(&tolerances, &point, states.clone())?;
            let seen = broken.judge(seen, &point);
            broken.states(&nominal, seen.as_ref(), &point);
        }
        Ok(broken.all)
    }

    /// The flow at a point; the inner error is one of the flow there.
    fn at(
        &self,
        tolerances: &[Tolerance],
        point: &Point,
        flow: Flow,
    ) -> Result<Result<View, crate::diag::Diagnostic>, RunError> {
        let keys = tolerances.iter().map(|tolerance| tolerance.key.as_str());
        let shifts: Vec<_> = keys.zip(point.iter().copied()).collect();
        match self.view(&flow.shifted(&shifts)) {
            Ok(view) => Ok(Ok(view)),
            Err(RunError::Unusable(diagnostic)) => Ok(Err(diagnostic)),
            Err(error) => Err(error),
        }
    }

    fn view(&self, flow: &Flow) -> Result<View, RunError> {
        let grow =
            |variant: &Variant, _: Fineness| self.simulator.run(variant, &self.grain, &|_, _| ());
        let mut wanted: Vec<_> = references(flow);
        wanted.retain(|at| *at != self.variant);
        wanted.insert(0, self.variant);
        let cells = wanted
            .iter()
            .map(|at| grow(&flow.variants[*at], Fineness::Coarse))
            .collect::<Result<Vec<Vec<CellTrace>>, SimError>>()?;
        let traces = wanted.iter().zip(&cells);
        let traces: Vec<_> = traces
            .map(|(&variant, cells)| Traces { variant, coarse: cells, fine: cells })
            .collect();
        let nothing_more =
            Wanted { electrical: false, closing_space: false, field_accuracy: self.field_accuracy };
        let measured = Measured::of(flow, &traces, &nothing_more, &grow)?;
        let variant = &flow.variants[self.variant];
        let graph = Graph::of(flow, variant);
        let sites = measured.site_figures()?;
        let context = rules::Context::new(flow, variant, &graph, &cells[0], &sites);
        let mut margins = Vec::new();
        for site in measured.sites() {
            for &quantity in MARGINS {
                let sides = measured.readings(&Question::plain(quantity, &site));
                let values = sides.into_iter().flatten().filter_map(|side| side.figure());
                if let Some(least) = values.map(|figure| figure.value).reduce(f64::min) {
                    margins.push(((site.label().to_owned(), quantity), least));
                }
            }
        }
        Ok(View {
            limits: verdict::judge(flow, variant, &measured),
            findings: rules::check(&context),
            margins,
        })
    }
}

/// What broke so far.
struct Broke<'a> {
    corners: &'a Corners<'a>,
    tolerances: &'a [Tolerance],
    /// Findings at the nominal values.
    known: Vec<&'a Finding>,
    all: Vec<Broken>,
}

impl Broke<'_> {
    /// Takes up the rules that fire at a point only; the view where the flow can be made there.
    fn judge(
        &mut self,
        seen: Result<View, crate::diag::Diagnostic>,
        point: &Point,
    ) -> Option<View> {
        let corner = self.told(point);
        let view = match seen {
            Ok(view) => view,
            Err(diagnostic) => {
                let span = diagnostic.span.unwrap_or(self.tolerances[0].span);
                let already = self.all.iter().any(
                    |b| matches!(b, Broken::Flow { message, .. } if *message == diagnostic.message),
                );
                if !already {
                    self.all.push(Broken::Flow { message: diagnostic.message, span, corner });
                }
                return None;
            }
        };
        for finding in view.findings.iter().filter(|f| f.severity > Severity::Note) {
            for site in self.sites(finding) {
                if self.is_new(finding, site.as_deref()) {
                    let (finding, corner) = (Box::new(finding.clone()), corner.clone());
                    self.all.push(Broken::Rule { finding, site, corner });
                }
            }
        }
        Some(view)
    }

    /// The sites of a finding, one by one; one `None` where it has none.
    fn sites(&self, finding: &Finding) -> Vec<Option<String>> {
        let listed = |list: &String| list.split(", ").map(|s| Some(s.to_owned())).collect();
        finding.site.as_ref().map_or_else(|| vec![None], listed)
    }

    /// Whether a rule fires on a step and a site for the first time.
    fn is_new(&self, finding: &Finding, site: Option<&str>) -> bool {
        let same = |other: &Finding| other.rule == finding.rule && other.step == finding.step;
        let here = |other: &Option<String>| match (other, site) {
            (None, _) | (_, None) => true,
            (Some(list), Some(site)) => list.split(", ").any(|one| one == site),
        };
        let known = self.known.iter().any(|other| same(other) && here(&other.site));
        let told = self.all.iter().any(|broken| match broken {
            Broken::Rule { finding, site, .. } => same(finding) && here(site),
            _ => false,
        });
        !known && !told
    }

    /// Takes up a limit whose margin is less than what the tolerances take of it.
    fn margin(&mut self, limit: &LimitReport, nominal: &View, ends: &[Vec<(f64, View)>]) {
        let Some(margin) = limit.margin.filter(|_| limit.holds == Some(true)) else { return };
        let of = |view: &View| same_limit(limit, &view.limits).and_then(|other| other.margin);
        let Some(before) = of(nominal) else { return };
        let losses: Vec<f64> = ends
            .iter()
            .map(|both| {
                let after = both.iter().filter_map(|(_, view)| of(view));
                after.fold(0.0, |loss, after| f64::max(loss, before - after))
            })
            .collect();
        let square: f64 = losses.iter().map(|loss| loss * loss).sum();
        let most = losses.iter().enumerate().max_by(|a, b| a.1.total_cmp(b.1));
        if let Some((at, most)) = most.filter(|_| square.sqrt() > margin) {
            let tolerance = &self.tolerances[at];
            self.all.push(Broken::Margin {
                limit: limit.text.clone(),
                span: self.span_of(limit),
                site: limit.site.clone(),
                margin,
                loss: square.sqrt(),
                dimension: self.dimension_of(limit),
                most: (format!("{} {}", tolerance.key, tolerance.written), most * most / square),
            });
        }
    }

    /// Takes up limits that hold at the nominal values and break at a point where they have no
    /// margin.
    fn states(&mut self, nominal: &View, view: Option<&View>, point: &Point) {
        let corner = self.told(point);
        for limit in view.into_iter().flat_map(|view| &view.limits) {
            let held = same_limit(limit, &nominal.limits).is_some_and(|l| l.holds == Some(true));
            let told = self.all.iter().any(|broken| match broken {
                Broken::Limit { limit: text, site, .. }
                | Broken::Margin { limit: text, site, .. } => {
                    *text == limit.text && *site == limit.site
                }
                _ => false,
            });
            if held && limit.holds == Some(false) && limit.margin.is_none() && !told {
                self.all.push(Broken::Limit {
                    limit: limit.text.clone(),
                    span: self.span_of(limit),
                    site: limit.site.clone(),
                    corner: corner.clone(),
                });
            }
        }
    }

    /// What moved at a point, in words.
    fn told(&self, point: &Point) -> Corner {
        let moved = self.tolerances.iter().zip(point).filter(|(_, part)| part.abs() > TOLD);
        let mut moved: Vec<_> = moved.collect();
        moved.sort_by(|a, b| b.1.abs().total_cmp(&a.1.abs()));
        let words = moved.into_iter().map(|(tolerance, part)| {
            let amount = tolerance.written.trim_start_matches("± ");
            let sign = if *part < 0.0 { "−" } else { "+" };
            if part.abs() > 0.995 {
                format!("{} {sign} {amount}", tolerance.key)
            } else {
                format!("{} {sign} {:.0} % of {amount}", tolerance.key, 100.0 * part.abs())
            }
        });
        words.collect()
    }

    fn limit_of(&self, report: &LimitReport) -> Option<&crate::flow::Limit> {
        let source = &self.corners.flow.source;
        self.corners.flow.limits.iter().find(|limit| {
            limit.text == report.text && source.position(limit.span.start).line == report.line
        })
    }

    fn span_of(&self, report: &LimitReport) -> crate::source::Span {
        self.limit_of(report).map_or(self.tolerances[0].span, |limit| limit.span)
    }

    fn dimension_of(&self, report: &LimitReport) -> crate::flow::Dimension {
        match self.limit_of(report).map(|limit| limit.claim) {
            Some(Claim::Bound { quantity, .. }) => quantity.dimension(),
            Some(Claim::State(_)) | None => crate::flow::Dimension::One,
        }
    }
}

fn is_state(claim: &Claim) -> bool {
    matches!(claim, Claim::State(_))
}

/// The same limit at the same site of another view.
fn same_limit<'v>(limit: &LimitReport, of: &'v [LimitReport]) -> Option<&'v LimitReport> {
    of.iter().find(|other| {
        other.line == limit.line && other.text == limit.text && other.site == limit.site
    })
}

/// The points, three standard deviations away, at which the margins are least; nearly equal
/// ones once.
fn directions(nominal: &View, ends: &[Vec<(f64, View)>]) -> Vec<Point> {
    let mut points: Vec<Point> = Vec::new();
    for (key, before) in &nominal.margins {
        let loss = |both: &Vec<(f64, View)>| {
            let of = |view: &View| view.margins.iter().find(|(k, _)| k == key).map(|(_, m)| *m);
            let losses = both.iter().filter_map(|(part, view)| Some((*part, before - of(view)?)));
            let worst = losses.max_by(|a, b| a.1.total_cmp(&b.1)).filter(|(_, loss)| *loss > 0.0);
            worst.map_or(0.0, |(part, loss)| part * loss)
        };
        let losses: Vec<f64> = ends.iter().map(loss).collect();
        let length = losses.iter().map(|loss| loss * loss).sum::<f64>().sqrt();
        if length == 0.0 {
            continue;
        }
        let point: Point = losses.iter().map(|loss| loss / length).collect();
        let cosine = |other: &Point| point.iter().zip(other).map(|(a, b)| a * b).sum::<f64>();
        let single = point.iter().any(|part| part.abs() > SAME_CORNER);
        if !single && points.iter().all(|other| cosine(other) < SAME_CORNER) {
            points.push(point);
        }
    }
    points
}
