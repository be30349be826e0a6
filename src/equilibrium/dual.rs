//! The dual of the Gibbs energy: a convex function of the component potentials, minimised by Newton's method.
//!
//! With n_s(λ) = exp(k_s + Σ ν_sc λ_c) the amount of species s at component potentials λ (in units of RT), the totals b are
//! met where f(λ) = Σ n_s(λ) − Σ b_c λ_c is least. f is convex, so Newton with a line search converges from any start. An
//! imposed gas fixes one linear combination of potentials and frees the total along it.

use nalgebra::{Cholesky, DMatrix, DVector};
use thiserror::Error;

/// Relative error of a total that is accepted.
pub const BALANCE_TOLERANCE: f64 = 1e-10;
const MOST_ITERATIONS: usize = 600;
/// Longest step of a component potential in one iteration, RT.
const LONGEST_STEP: f64 = 8.0;

/// One linear condition on component potentials: Σ a_c λ_c = value.
#[derive(Debug, Clone)]
pub struct Imposed {
    pub coefficients: Vec<(usize, f64)>,
    pub value: f64,
}

/// Which component could not be met, or which conditions contradict each other.
#[derive(Debug, Error, PartialEq)]
pub enum DualError {
    #[error("imposed conditions contradict each other (condition {0})")]
    Contradiction(usize),
    #[error("the total of component {component} is missed by {miss:.1e} of itself")]
    NotMet { component: usize, miss: f64 },
}

/// Species, totals and imposed conditions of one problem.
#[derive(Debug)]
pub struct Dual {
    /// For each species its (component, count) pairs.
    pub stoichiometry: Vec<Vec<(usize, f64)>>,
    /// Total of each component, mol/kg.
    pub totals: DVector<f64>,
    /// λ = origin + freedom · y
    origin: DVector<f64>,
    freedom: DMatrix<f64>,
}

impl Dual {
    /// Sets the problem up.
    ///
    /// # Errors
    /// [`DualError::Contradiction`] when two imposed conditions cannot hold at once.
    pub fn new(
        stoichiometry: Vec<Vec<(usize, f64)>>,
        totals: Vec<f64>,
        imposed: &[Imposed],
    ) -> Result<Self, DualError> {
        let (origin, freedom) = parametrise(totals.len(), imposed)?;
        Ok(Self { stoichiometry, totals: DVector::from_vec(totals), origin, freedom })
    }

    /// Potentials that meet the totals, improved from `lambda`; `constants` are the k_s.
    ///
    /// # Errors
    /// [`DualError::NotMet`] names the component that is furthest from its total.
    pub fn solve(&self, constants: &[f64], lambda: &mut DVector<f64>) -> Result<(), DualError> {
        let mut y = self.freedom.tr_mul(&(&*lambda - &self.origin));
        self.restore(&mut y, lambda);
        let mut amounts = vec![0.0; constants.len()];
        self.evaluate(constants, lambda, &mut amounts);
        let mut trial = lambda.clone();
        for _ in 0..MOST_ITERATIONS {
            if self.worst(&amounts).1 <= 0.01 * BALANCE_TOLERANCE {
                return Ok(());
            }
            let (gradient, hessian) = self.derivatives(&amounts);
            let step = newton_step(&gradient, hessian);
            let slope = gradient.dot(&step).abs();
            let longest = (&self.freedom * &step).amax();
            let mut scale = if longest > LONGEST_STEP { LONGEST_STEP / longest } else { 1.0 };
            // The slope along the step decides, not f: traces of 1e-12 mol/kg are lost in the rounding of f.
            for _ in 0..40 {
                self.restore_into(&(&y + scale * &step), &mut trial);
                self.evaluate(constants, &trial, &mut amounts);
                if self.gradient(&amounts).dot(&step) <= 0.9 * slope {
                    break;
                }
                scale *= 0.5;
            }
            y += scale * &step;
            lambda.copy_from(&trial);
        }
        match self.worst(&amounts) {
            (_, miss) if miss <= BALANCE_TOLERANCE => Ok(()),
            (component, miss) => Err(DualError::NotMet { component, miss }),
        }
    }

    /// Largest relative error of a balance at the amounts given.
    pub fn balance_error(&self, amounts: &[f64]) -> f64 {
        self.worst(amounts).1
    }

    fn restore(&self, y: &mut DVector<f64>, lambda: &mut DVector<f64>) {
        // The columns of `freedom` are not orthogonal: project properly before starting.
        let gram = self.freedom.tr_mul(&self.freedom);
        if let Some(cholesky) = Cholesky::new(gram) {
            *y = cholesky.solve(y);
        }
        self.restore_into(&y.clone(), lambda);
    }

    fn restore_into(&self, y: &DVector<f64>, lambda: &mut DVector<f64>) {
        lambda.copy_from(&self.origin);
        lambda.gemv(1.0, &self.freedom, y, 1.0);
    }

    /// Amounts of all species, mol/kg.
    fn evaluate(&self, constants: &[f64], lambda: &DVector<f64>, amounts: &mut [f64]) {
        for ((amount, k), terms) in amounts.iter_mut().zip(constants).zip(&self.stoichiometry) {
            let exponent: f64 = k + terms.iter().map(|(c, count)| count * lambda[*c]).sum::<f64>();
            *amount = exponent.min(600.0).exp();
        }
    }

    /// ∂f/∂y: what is held less what is asked, along the free directions.
    fn gradient(&self, amounts: &[f64]) -> DVector<f64> {
        let mut gradient = -self.totals.clone();
        for (amount, terms) in amounts.iter().zip(&self.stoichiometry) {
            for (c, count) in terms {
                gradient[*c] += count * amount;
            }
        }
        self.freedom.tr_mul(&gradient)
    }

    fn derivatives(&self, amounts: &[f64]) -> (DVector<f64>, DMatrix<f64>) {
        let n = self.totals.len();
        let mut hessian = DMatrix::zeros(n, n);
        for (amount, terms) in amounts.iter().zip(&self.stoichiometry) {
            for (c, count) in terms {
                for (d, other) in terms {
                    hessian[(*c, *d)] += count * other * amount;
                }
            }
        }
        let reduced = self.freedom.tr_mul(&(hessian * &self.freedom));
        (self.gradient(amounts), reduced)
    }

    /// The free direction whose balance is furthest off, and by how much relative to what it holds.
    fn worst(&self, amounts: &[f64]) -> (usize, f64) {
        let n = self.totals.len();
        let mut found = DVector::<f64>::zeros(n);
        let mut size = DVector::<f64>::zeros(n);
        for (amount, terms) in amounts.iter().zip(&self.stoichiometry) {
            for (c, count) in terms {
                found[*c] += count * amount;
                size[*c] += count.abs() * amount;
            }
        }
        let mut worst = (0, 0.0);
        for j in 0..self.freedom.ncols() {
            let column = self.freedom.column(j);
            let miss = column.dot(&(&found - &self.totals)).abs();
            let scale: f64 = column
                .iter()
                .zip(size.iter().zip(self.totals.iter()))
                .map(|(f, (s, b))| f.abs() * s.max(b.abs()))
                .sum();
            let relative = if scale > 0.0 { miss / scale } else { 0.0 };
            if relative > worst.1 || relative.is_nan() {
                worst = (column.iamax(), relative);
            }
        }
        worst
    }
}

/// Solves H·step = −gradient after scaling, with a little regularisation when H is close to singular.
fn newton_step(gradient: &DVector<f64>, mut hessian: DMatrix<f64>) -> DVector<f64> {
    let n = gradient.len();
    let scale = DVector::from_fn(n, |i, _| hessian[(i, i)].max(1e-300).sqrt().recip());
    for i in 0..n {
        for j in 0..n {
            hessian[(i, j)] *= scale[i] * scale[j];
        }
    }
    let right = -gradient.component_mul(&scale);
    for damping in [1e-14, 1e-9, 1e-5, 1e-2] {
        let mut damped = hessian.clone();
        for i in 0..n {
            damped[(i, i)] += damping;
        }
        if let Some(cholesky) = Cholesky::new(damped) {
            return cholesky.solve(&right).component_mul(&scale);
        }
    }
    right.component_mul(&scale)
}

/// Solves the imposed conditions for as many potentials by elimination: λ = origin + freedom · y.
fn parametrise(components: usize, imposed: &[Imposed]) -> Result<(DVector<f64>, DMatrix<f64>), DualError> {
    let mut rows: Vec<(DVector<f64>, f64, usize)> = Vec::new();
    for (i, condition) in imposed.iter().enumerate() {
        let mut row = DVector::<f64>::zeros(components);
        for (c, a) in &condition.coefficients {
            row[*c] += a;
        }
        let mut value = condition.value;
        for (other, other_value, pivot) in &rows {
            let factor = row[*pivot];
            row.axpy(-factor, other, 1.0);
            value -= factor * other_value;
        }
        let pivot = if components == 0 { 0 } else { row.iamax() };
        if components == 0 || row[pivot].abs() < 1e-12 {
            if value.abs() > 1e-9 {
                return Err(DualError::Contradiction(i));
            }
            continue;
        }
        let lead = row[pivot];
        row /= lead;
        value /= lead;
        for (other, other_value, _) in &mut rows {
            let factor = other[pivot];
            other.axpy(-factor, &row, 1.0);
            *other_value -= factor * value;
        }
        rows.push((row, value, pivot));
    }
    let pivots: Vec<usize> = rows.iter().map(|(_, _, pivot)| *pivot).collect();
    let free: Vec<usize> = (0..components).filter(|c| !pivots.contains(c)).collect();
    let mut origin = DVector::zeros(components);
    let mut freedom = DMatrix::zeros(components, free.len());
    for (j, c) in free.iter().enumerate() {
        freedom[(*c, j)] = 1.0;
    }
    for (row, value, pivot) in &rows {
        origin[*pivot] = *value;
        for (j, c) in free.iter().enumerate() {
            freedom[(*pivot, j)] = -row[*c];
        }
    }
    Ok((origin, freedom))
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Copper and ammonia with the cumulative constants 4.04, 7.47, 10.27, 11.75 (stability constants as published for the
    /// ammines at 25 °C, value from memory); the answer is checked by its mass balances and its mass action.
    #[test]
    fn meets_totals_and_mass_action_of_a_stepwise_complex() {
        let beta = [4.04, 7.47, 10.27, 11.75];
        let mut stoichiometry = vec![vec![(0, 1.0)], vec![(1, 1.0)]];
        let mut constants = vec![0.0, 0.0];
        for (n, log) in beta.iter().enumerate() {
            stoichiometry.push(vec![(0, 1.0), (1, n as f64 + 1.0)]);
            constants.push(log * std::f64::consts::LN_10);
        }
        let dual = Dual::new(stoichiometry, vec![0.01, 0.5], &[]).expect("no conditions");
        for start in [-40.0, 0.0, 25.0] {
            let mut lambda = DVector::from_element(2, start);
            dual.solve(&constants, &mut lambda).expect("converges");
            let (copper, ammonia) = (lambda[0].exp(), lambda[1].exp());
            let bound: f64 = (1..=4).map(|n| 10f64.powf(beta[n - 1]) * copper * ammonia.powi(n as i32)).sum();
            assert!(((copper + bound) / 0.01 - 1.0).abs() < 1e-9, "copper balance from start {start}");
        }
    }

    #[test]
    fn an_imposed_potential_frees_its_total() {
        let stoichiometry = vec![vec![(0, 1.0)], vec![(1, 1.0)], vec![(0, 1.0), (1, 1.0)]];
        let imposed = [Imposed { coefficients: vec![(0, 1.0)], value: -3.0 }];
        let dual = Dual::new(stoichiometry, vec![0.0, 1.0], &imposed).expect("consistent");
        let mut lambda = DVector::zeros(2);
        dual.solve(&[0.0, 0.0, 2.0], &mut lambda).expect("converges");
        assert_eq!(lambda[0], -3.0);
        let held = lambda[1].exp() * (1.0 + (2.0 - 3.0f64).exp());
        assert!((held - 1.0).abs() < 1e-9);
    }

    #[test]
    fn contradicting_conditions_are_named() {
        let twice = |value| Imposed { coefficients: vec![(0, 1.0)], value };
        let problem = Dual::new(vec![vec![(0, 1.0)]], vec![1.0], &[twice(0.0), twice(1.0)]);
        assert_eq!(problem.err(), Some(DualError::Contradiction(1)));
    }
}
