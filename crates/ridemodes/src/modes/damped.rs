//! Modes with damping, from the first-order form.
//!
//! The second-order part is taken in its elastic modes with states [ω a, ȧ]: then the state matrix is
//! [[0, Ω], [−Ω, −C]], whose size is that of the largest pole and not of its square, and the rounding
//! of the eigenvalues stays relative to that. Eigenvalues and vectors come from faer, which brings
//! vectors of non-symmetric matrices (also where poles repeat) in pure Rust.

use nalgebra::{DMatrix, DVector};
use num_complex::Complex64;

use super::RawMode;
use super::undamped::{elastic, whiten};
use crate::error::{Error, Result};
use crate::numerics::SymmetricFactor;
use crate::system::{Canonical, LinearSystem};

/// Poles in the closed upper half-plane with their shapes, by ascending |λ|.
pub(super) fn solve(system: &LinearSystem) -> Result<Vec<RawMode>> {
    let form = FirstOrder::new(system.canonical()?)?;
    let size = form.state.nrows();
    let matrix = faer::Mat::from_fn(size, size, |i, j| form.state[(i, j)]);
    let eigen = faer::linalg::solvers::Eigen::new_from_real(matrix.as_ref()).map_err(|_| Error::NotConverged {
        what: "eigenvalues of the state matrix".into(),
        iterations: 0,
        residual: f64::NAN,
        last: Vec::new(),
    })?;
    // Rounding turns two equal real poles into a pair with an imaginary part of this size.
    let rounding = 64.0 * f64::EPSILON * form.state.amax();
    let poles: Vec<Complex64> = (0..size).map(|k| Complex64::new(eigen.S()[k].re, eigen.S()[k].im)).collect();
    let mut vectors = DMatrix::from_fn(size, size, |i, k| Complex64::new(eigen.U()[(i, k)].re, eigen.U()[(i, k)].im));
    mend_repeated(&form.state, &poles, &mut vectors);
    let mut modes: Vec<RawMode> = Vec::with_capacity(size);
    for k in 0..size {
        let pole = poles[k];
        let state = |i: usize| vectors[(i, k)];
        if pole.im > rounding {
            modes.push(RawMode { pole, shape: form.shape(pole, state) });
        } else if pole.im > 0.0 {
            modes.extend(real_pair(&form, pole.re, state));
        } else if pole.im == 0.0 {
            modes.push(RawMode { pole, shape: form.shape(pole, state) });
        }
    }
    for row in 0..modes.len() {
        // A step is safe while it stays well nearer to this pole than to any other, its own conjugate among them.
        let pole = modes[row].pole;
        let others = (0..modes.len()).filter(|&other| other != row).map(|other| modes[other].pole);
        let conjugate = (pole.im > 0.0).then(|| pole.conj());
        let gap = others.chain(conjugate).fold(f64::INFINITY, |least, other| least.min((pole - other).norm()));
        let reach = (64.0 * rounding).max(0.05 * gap.min(pole.norm()));
        modes[row].pole = refined(system, &modes[row], reach);
        polish(system, &mut modes[row], reach);
    }
    modes.sort_by(|a, b| a.pole.norm().total_cmp(&b.pole.norm()).then(a.pole.re.total_cmp(&b.pole.re)));
    Ok(modes)
}

// Vectors of equal poles come out of back substitution with a large residual. They are replaced by the null
// vectors of A − λI, from its singular vectors; where there are fewer of them than poles, the pole is defective and
// its vectors repeat.
fn mend_repeated(state: &DMatrix<f64>, poles: &[Complex64], vectors: &mut DMatrix<Complex64>) {
    let size = state.nrows();
    let scale = state.amax();
    let complex = state.map(Complex64::from);
    let residual = |vectors: &DMatrix<Complex64>, k: usize| {
        let column = vectors.column(k);
        (&complex * column - column * poles[k]).norm() / (scale * column.norm())
    };
    let mut done = vec![false; size];
    for k in 0..size {
        if done[k] || residual(vectors, k) <= 1e3 * size as f64 * f64::EPSILON {
            continue;
        }
        let equal: Vec<usize> = (0..size).filter(|&j| (poles[j] - poles[k]).norm() <= 1e-9 * poles[k].norm()).collect();
        let shifted = &complex - DMatrix::from_diagonal_element(size, size, poles[k]);
        let Some(right) = shifted.svd(false, true).v_t else { continue };
        // Singular values descend: the last rows span the null space.
        let null = |place: usize| right.row(size - 1 - place).adjoint();
        let is_null = |place: usize| (&complex * null(place) - null(place) * poles[k]).norm() <= 1e-9 * scale;
        let count = (0..equal.len()).take_while(|&place| is_null(place)).count().max(1);
        for (place, &j) in equal.iter().enumerate() {
            vectors.set_column(j, &null(place % count));
            done[j] = true;
        }
    }
}

// One Newton step on ψᵀ(λ²M + λC + K)ψ = 0. The eigensolver's rounding is relative to the largest pole; the
// quotient is stationary in the shape (left vectors are right vectors, transposed), so it gives slow poles beside
// stiff oil their digits back. It is summed over the elements, whose travels are small where the oil is stiff.
fn refined(system: &LinearSystem, mode: &RawMode, reach: f64) -> Complex64 {
    let (pole, shape) = (mode.pole, &mode.shape);
    let mut value = Complex64::new(0.0, 0.0);
    let mut slope = value;
    let mut add = |mass: f64, damping: f64, stiffness: f64, square: Complex64| {
        value += (pole * (pole * mass + damping) + stiffness) * square;
        slope += (pole * (2.0 * mass) + damping) * square;
    };
    for element in system.elements() {
        let travel: Complex64 = element.row.iter().zip(shape).map(|(g, u)| u * *g).sum();
        add(element.mass, element.damping, element.stiffness, travel * travel);
    }
    for i in 0..3 {
        for j in 0..3 {
            add(system.body[i][j], 0.0, 0.0, shape[i] * shape[j]);
        }
    }
    // A longer step comes from a nearly defective pole or from a mix of two equal ones, where the slope vanishes:
    // there is nothing to gain.
    let step = value / slope;
    if step.norm() <= reach { pole - step } else { pole }
}

/// Residual of a shape, against the size of its terms, that is left as it is.
const CLEAN: f64 = 5e-13;

// Inverse iteration (λ²M + λC + K)ψ' = (2λM + C)ψ: the eigensolver's shapes carry its rounding, relative to the
// largest pole; beside stiff oil that is seen. With this right-hand side a shape keeps apart from those of nearly
// equal poles. What is left then is small in 2λM + C and large in K; a plain step, with ψ itself, takes it out.
fn polish(system: &LinearSystem, mode: &mut RawMode, reach: f64) {
    let n = mode.shape.len();
    let (mass, damping, stiffness) = (system.mass(), system.damping(), system.stiffness());
    for plain in [false, true] {
        let (pole, size) = (mode.pole, mode.pole.norm());
        // Every coordinate in its own unit, in which the terms are of size 1.
        let square = |i: usize| size * (size * mass[(i, i)] + damping[(i, i)]) + stiffness[(i, i)].abs();
        let unit: Vec<f64> = (0..n).map(|i| 1.0 / square(i).sqrt()).collect();
        if !unit.iter().all(|unit| unit.is_finite()) {
            return; // a circulation without inertance and resistance
        }
        let dynamic = DMatrix::from_fn(n, n, |i, j| {
            (pole * (pole * mass[(i, j)] + damping[(i, j)]) + stiffness[(i, j)]) * (unit[i] * unit[j])
        });
        let residual = |x: &DVector<Complex64>| (&dynamic * x).norm() / x.norm();
        let start = DVector::from_fn(n, |i, _| mode.shape[i] / unit[i]);
        let before = residual(&start);
        if before <= CLEAN {
            return;
        }
        let right = DVector::from_fn(n, |i, _| {
            if plain {
                return start[i];
            }
            (0..n).map(|j| (pole * 2.0 * mass[(i, j)] + damping[(i, j)]) * mode.shape[j]).sum::<Complex64>() * unit[i]
        });
        // At a pole exact to the last digit the matrix may come out singular; next to it it is not.
        let near = || &dynamic + DMatrix::from_diagonal_element(n, n, Complex64::from(4.0 * f64::EPSILON));
        let improves = |x: &DVector<Complex64>| x.norm().is_finite() && residual(x) < before;
        let better = Some(SymmetricFactor::new(dynamic.clone()).solve(&right))
            .filter(|x| x.norm().is_finite() && residual(x) <= CLEAN.max(1e-3 * before))
            .or_else(|| dynamic.clone().lu().solve(&right).filter(improves))
            .or_else(|| near().lu().solve(&right).filter(improves));
        let Some(better) = better else { return };
        let scale = 1.0 / better.norm();
        mode.shape = (0..n).map(|i| better[i] * unit[i] * scale).collect();
        mode.pole = refined(system, mode, reach);
        if residual(&better) <= CLEAN {
            return;
        }
    }
}

// Two equal real poles: the real and the imaginary part of the pair's vector span their shapes. Of a defective
// pole there is one shape, and it stands for both.
fn real_pair(form: &FirstOrder<'_>, pole: f64, state: impl Fn(usize) -> Complex64) -> [RawMode; 2] {
    type Part = fn(Complex64) -> f64;
    let pole = Complex64::from(pole);
    let shape = |part: Part| form.shape(pole, |i| Complex64::from(part(state(i))));
    let size = |part: Part| (0..form.state.nrows()).map(|i| part(state(i)).powi(2)).sum::<f64>().sqrt();
    let (real, imaginary): (Part, Part) = (|z| z.re, |z| z.im);
    let main = if size(real) >= size(imaginary) { real } else { imaginary };
    let either = |part| if size(part) > 1e-8 * size(main) { shape(part) } else { shape(main) };
    [RawMode { pole, shape: either(real) }, RawMode { pole, shape: either(imaginary) }]
}

/// ẋ = A x with x = [s a, η̇, t ζ]: elastic modal coordinates, all second-order rates, first-order ones.
struct FirstOrder<'a> {
    split: &'a Canonical,
    state: DMatrix<f64>,
    /// Physical coordinates per whitened second-order coordinate (circulations first, then elastic modes).
    second: DMatrix<f64>,
    /// Physical coordinates per whitened first-order coordinate (circulations first).
    first: DMatrix<f64>,
    c_sf: DMatrix<f64>,
    second_scale: Vec<f64>,
    first_scale: Vec<f64>,
}

impl<'a> FirstOrder<'a> {
    fn new(split: &'a Canonical) -> Result<Self> {
        let singular = |matrix: &str| Error::Singular { matrix: matrix.into(), motion: "no inverse".into() };
        let (loops, first_loops) = (split.second_loops, split.first_loops);
        let ns = split.mass.nrows();
        let nf = split.c_ff.nrows();
        let (np, nz) = (ns - loops, nf - first_loops);
        let whitened = whiten(split)?;
        let (values, vectors) = elastic(&whitened, loops);
        let mut modal = DMatrix::identity(ns, ns);
        modal.view_mut((loops, loops), (np, np)).copy_from(&vectors);
        let to_second = whitened.to_second * modal;
        let mut to_first = DMatrix::identity(nf, nf);
        if nf > 0 {
            let factor = split.c_ff.clone().cholesky().ok_or_else(|| singular("damping"))?;
            factor.l_dirty().tr_solve_lower_triangular_mut(&mut to_first);
        }
        let c_ss = to_second.transpose() * &split.c_ss * &to_second;
        let c_sf = to_second.transpose() * &split.c_sf * &to_first;
        let k_sf = to_second.transpose() * &split.k_sf * &to_first;
        let k_ff = to_first.transpose() * &split.k_ff * &to_first;
        // Scales that balance the state matrix.
        let scale = |square: f64| if square > 0.0 { square.sqrt() } else { 1.0 };
        let floor = values.iter().fold(0.0_f64, |most, value| most.max(*value)) * f64::EPSILON;
        let second_scale: Vec<f64> = values.iter().map(|value| scale(value.abs().max(floor))).collect();
        let first_scale: Vec<f64> = (0..nz).map(|i| scale(k_ff[(first_loops + i, first_loops + i)])).collect();

        // ζ̇ = −C_fs η̇ − K_fs η − K_ff ζ over the states, with C_ff = I
        let size = np + ns + nz;
        let mut first_rate = DMatrix::zeros(nf, size);
        for i in 0..nf {
            for j in 0..np {
                first_rate[(i, j)] = -k_sf[(loops + j, i)] / second_scale[j];
            }
            for j in 0..ns {
                first_rate[(i, np + j)] = -c_sf[(j, i)];
            }
            for j in 0..nz {
                first_rate[(i, np + ns + j)] = -k_ff[(i, first_loops + j)] / first_scale[j];
            }
        }
        let mut state = DMatrix::zeros(size, size);
        // η̈ = −K η − C η̇ − K_sf ζ − C_sf ζ̇
        let exchange = &c_sf * &first_rate;
        for i in 0..ns {
            for j in 0..size {
                state[(np + i, j)] = -exchange[(i, j)];
            }
            for j in 0..ns {
                state[(np + i, np + j)] -= c_ss[(i, j)];
            }
            for j in 0..nz {
                state[(np + i, np + ns + j)] -= k_sf[(i, first_loops + j)] / first_scale[j];
            }
        }
        for i in 0..np {
            state[(i, np + loops + i)] = second_scale[i];
            state[(np + loops + i, i)] -= values[i] / second_scale[i];
        }
        for i in 0..nz {
            for j in 0..size {
                state[(np + ns + i, j)] = first_scale[i] * first_rate[(first_loops + i, j)];
            }
        }
        Ok(Self {
            split,
            state,
            second: &split.second * to_second,
            first: &split.first * to_first,
            c_sf,
            second_scale,
            first_scale,
        })
    }

    // The physical shape of an eigenvector. A circulation has a flow; its volume is the flow over λ.
    fn shape(&self, pole: Complex64, state: impl Fn(usize) -> Complex64) -> Vec<Complex64> {
        let (loops, first_loops) = (self.split.second_loops, self.split.first_loops);
        let ns = self.second.ncols();
        let nf = self.first.ncols();
        let np = ns - loops;
        let over_pole = |flow: Complex64| if pole.norm() > 0.0 { flow / pole } else { Complex64::new(0.0, 0.0) };
        let second: Vec<Complex64> = (0..ns)
            .map(|i| if i < loops { over_pole(state(np + i)) } else { state(i - loops) / self.second_scale[i - loops] })
            .collect();
        let first: Vec<Complex64> = (0..nf)
            .map(|i| {
                if i < first_loops {
                    // ζ̇ = −C_fs η̇ where nothing stores
                    let flow: Complex64 = (0..ns).map(|j| state(np + j) * -self.c_sf[(j, i)]).sum();
                    over_pole(flow)
                } else {
                    state(np + ns + i - first_loops) / self.first_scale[i - first_loops]
                }
            })
            .collect();
        (0..self.second.nrows())
            .map(|row| {
                let from_second: Complex64 = (0..ns).map(|i| second[i] * self.second[(row, i)]).sum();
                let from_first: Complex64 = (0..nf).map(|i| first[i] * self.first[(row, i)]).sum();
                from_second + from_first
            })
            .collect()
    }
}
