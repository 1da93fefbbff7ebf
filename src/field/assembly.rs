//! One linear system behind primal and dual: minimise ∫ c |∇(w + Σ f_k l_k)|² over w.
//!
//! w runs over second-order functions with free nodes, the loads l_k are given triangle by
//! triangle (they may jump), f_k are the coefficients. The minimum is the quadratic form of
//! e − rᵀ K⁻¹ r in f; K is factorised as LLᵀ by faer, sequentially, with an ordering that the
//! variants of a section share.

use std::cell::OnceCell;

use faer::linalg::solvers::Solve;
use faer::sparse::linalg::solvers::{Llt, SymbolicLlt};
use faer::sparse::{SparseColMat, SymbolicSparseColMat};
use faer::{Mat, Side};

use super::FieldError;
use super::elements::{Local, Nodes};
use super::triangulation::NONE;

/// Which nodes are free, and the loads.
pub(super) struct System {
    /// The unknown of each node, or [`NONE`] where it is held.
    pub unknown: Vec<u32>,
    /// How many unknowns there are.
    pub unknowns: usize,
    /// How many loads there are.
    pub columns: usize,
    /// Loads of each triangle: column and node values, by [`System::start`].
    pub loads: Vec<(u32, Local)>,
    /// Where the loads of each triangle begin; one more entry than triangles.
    pub start: Vec<u32>,
    /// Elements at each unknown, by [`System::first`]: triangle times six plus local node.
    incident: Vec<u32>,
    first: Vec<u32>,
    ordering: OnceCell<SymbolicLlt<usize>>,
}

/// The minimised energies of a system.
pub(super) struct Condensed {
    /// The quadratic form of the minimum in the coefficients of the loads.
    pub energies: Mat<f64>,
    /// The energy of each load alone: minimising takes from it, so the minimum is as exact as
    /// the rounding of this.
    pub unminimised: Vec<f64>,
    /// The minimising w of each load, by unknown.
    pub fields: Mat<f64>,
}

impl System {
    /// Lays out a system: `held` nodes are not free; loads sorted by triangle.
    pub fn new(
        nodes: &Nodes,
        held: impl Fn(u32) -> bool,
        loads: Vec<(u32, u32, Local)>,
        columns: usize,
    ) -> Self {
        let mut unknown = vec![NONE; nodes.count];
        let mut unknowns = 0;
        // Numbering by triangle keeps neighbours near each other in memory.
        for node in nodes.of.iter().flatten() {
            if unknown[*node as usize] == NONE && !held(*node) {
                unknown[*node as usize] = unknowns;
                unknowns += 1;
            }
        }
        let unknowns = unknowns as usize;
        let mut start = vec![0; nodes.of.len() + 1];
        loads.iter().for_each(|(t, ..)| start[*t as usize + 1] += 1);
        (0..nodes.of.len()).for_each(|t| start[t + 1] += start[t]);

        let mut first = vec![0; unknowns + 1];
        let of = |node: &u32| unknown[*node as usize];
        for u in nodes.of.iter().flatten().map(of).filter(|u| *u != NONE) {
            first[u as usize + 1] += 1;
        }
        (0..unknowns).for_each(|u| first[u + 1] += first[u]);
        let mut next = first.clone();
        let mut incident = vec![0; first[unknowns] as usize];
        for (k, u) in nodes.of.iter().flatten().map(of).enumerate().filter(|(_, u)| *u != NONE) {
            incident[next[u as usize] as usize] = k as u32;
            next[u as usize] += 1;
        }
        let loads = loads.into_iter().map(|(_, column, values)| (column, values)).collect();
        Self {
            unknown,
            unknowns,
            columns,
            loads,
            start,
            incident,
            first,
            ordering: OnceCell::new(),
        }
    }

    /// Loads of one triangle.
    pub fn loads_of(&self, t: usize) -> &[(u32, Local)] {
        &self.loads[self.start[t] as usize..self.start[t + 1] as usize]
    }

    /// Minimises for the coefficient c of each triangle; `stiffness` with c = 1.
    pub fn condense(
        &self,
        nodes: &Nodes,
        stiffness: &[[Local; 6]],
        coefficient: &[f64],
    ) -> Result<Condensed, FieldError> {
        let (mut energies, mut loads) = self.load(nodes, stiffness, coefficient);
        let loaded = loads.clone();
        let unminimised = (0..self.columns).map(|k| energies[(k, k)]).collect();
        if self.unknowns > 0 && self.columns > 0 {
            let failed = |e: &dyn std::fmt::Debug| FieldError::internal(format!("factor: {e:?}"));
            let matrix = self.matrix(nodes, stiffness, coefficient);
            if self.ordering.get().is_none() {
                let ordering =
                    SymbolicLlt::try_new(matrix.symbolic(), Side::Lower).map_err(|e| failed(&e))?;
                self.ordering.get_or_init(|| ordering);
            }
            let ordering = self.ordering.get().expect("was just made").clone();
            let factor = Llt::try_new_with_symbolic(ordering, matrix.as_ref(), Side::Lower)
                .map_err(|e| failed(&e))?;
            factor.solve_in_place(loads.as_mut());
        }
        for a in 0..self.columns {
            for b in a..self.columns {
                let gain: f64 =
                    loaded.col(a).iter().zip(loads.col(b).iter()).map(|(r, x)| r * x).sum();
                energies[(a, b)] -= gain;
                energies[(b, a)] = energies[(a, b)];
            }
        }
        let fields = Mat::from_fn(self.unknowns, self.columns, |u, k| -loads[(u, k)]);
        Ok(Condensed { energies, unminimised, fields })
    }

    /// Node values of each triangle for combinations of loads: `fields` and `coefficients`
    /// hold one combination a column.
    pub fn local(
        &self,
        nodes: &Nodes,
        t: usize,
        fields: &Mat<f64>,
        coefficients: &Mat<f64>,
        combination: usize,
    ) -> Local {
        let mut values = nodes.of[t].map(|node| match self.unknown[node as usize] {
            NONE => 0.0,
            u => fields[(u as usize, combination)],
        });
        for (column, load) in self.loads_of(t) {
            let factor = coefficients[(*column as usize, combination)];
            values.iter_mut().zip(load).for_each(|(v, l)| *v += factor * l);
        }
        values
    }

    /// Energies of the loads alone, and their products with the free functions.
    fn load(
        &self,
        nodes: &Nodes,
        stiffness: &[[Local; 6]],
        coefficient: &[f64],
    ) -> (Mat<f64>, Mat<f64>) {
        let mut energies = Mat::zeros(self.columns, self.columns);
        let mut products = Mat::zeros(self.unknowns, self.columns);
        for t in 0..nodes.of.len() {
            let loads = self.loads_of(t);
            for (column, values) in loads {
                let column = *column as usize;
                let flux = stiffness[t].map(|row| {
                    coefficient[t] * row.iter().zip(values).map(|(k, v)| k * v).sum::<f64>()
                });
                for (node, f) in nodes.of[t].iter().zip(flux) {
                    let u = self.unknown[*node as usize];
                    if u != NONE {
                        products[(u as usize, column)] += f;
                    }
                }
                for (other, values) in loads {
                    energies[(column, *other as usize)] +=
                        values.iter().zip(flux).map(|(v, f)| v * f).sum::<f64>();
                }
            }
        }
        (energies, products)
    }

    /// The lower triangle of K by columns.
    fn matrix(
        &self,
        nodes: &Nodes,
        stiffness: &[[Local; 6]],
        coefficient: &[f64],
    ) -> SparseColMat<usize, f64> {
        let mut columns = Vec::with_capacity(self.unknowns + 1);
        let mut rows: Vec<usize> = Vec::with_capacity(8 * self.unknowns);
        let mut values = Vec::with_capacity(8 * self.unknowns);
        let mut sum = vec![0.0; self.unknowns];
        let mut seen = vec![usize::MAX; self.unknowns];
        columns.push(0);
        for column in 0..self.unknowns {
            let begin = rows.len();
            let incident = self.first[column] as usize..self.first[column + 1] as usize;
            for k in &self.incident[incident] {
                let (t, b) = (*k as usize / 6, *k as usize % 6);
                for (node, s) in nodes.of[t].iter().zip(&stiffness[t][b]) {
                    let row = self.unknown[*node as usize];
                    if row == NONE || (row as usize) < column {
                        continue;
                    }
                    let row = row as usize;
                    if seen[row] != column {
                        seen[row] = column;
                        sum[row] = 0.0;
                        rows.push(row);
                    }
                    sum[row] += coefficient[t] * s;
                }
            }
            rows[begin..].sort_unstable();
            values.extend(rows[begin..].iter().map(|row| sum[*row]));
            columns.push(rows.len());
        }
        let n = self.unknowns;
        SparseColMat::new(SymbolicSparseColMat::new_checked(n, n, columns, None, rows), values)
    }
}
