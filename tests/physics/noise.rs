//! Points with errors: what each fit makes of them, and whether its margin holds the truth.
//!
//! The truth is a closed form, x = u, y = 10 sin 0.14 u, z = 8 cos(0.1 u + 1), whose curvature
//! reaches 0.21 1/m; loads are v²κ/g₀ at 25 m/s.

use crestfall::input::{Columns, Fit, PointTable, Track, TrackSource};
use crestfall::spine::{FitMethod, Spine};
use nalgebra::Vector3;

use crate::fixture::place;

/// v²/g₀ at 25 m/s, g per 1/m.
const G_PER_BEND: f64 = 25.0 * 25.0 / 9.80665;

/// The end layer of an open track: the larger of these on either side.
const END_M: f64 = 5.0;
const END_POINTS: f64 = 8.0;

/// Position and two derivatives in u.
fn truth(u: f64) -> [Vector3<f64>; 3] {
    let ((s, c), (sz, cz)) = ((0.14 * u).sin_cos(), (0.1 * u + 1.0).sin_cos());
    [
        Vector3::new(u, 10.0 * s, 8.0 * cz),
        Vector3::new(1.0, 1.4 * c, -0.8 * sz),
        Vector3::new(0.0, -0.196 * s, -0.08 * cz),
    ]
}

fn true_curvature(u: f64) -> f64 {
    let [_, r1, r2] = truth(u);
    r1.cross(&r2).norm() / r1.norm().powi(3)
}

/// What spoils a point.
#[derive(Clone, Copy, Debug)]
enum Spoilt {
    Rounded(f64),
    Gaussian(f64),
}

impl Spoilt {
    /// Standard deviation per coordinate.
    fn deviation(self) -> f64 {
        match self {
            Self::Rounded(grid_m) => grid_m / 12f64.sqrt(),
            Self::Gaussian(deviation_m) => deviation_m,
        }
    }

    /// The decimal grid on which a table of such points sits.
    fn grid_m(self) -> f64 {
        match self {
            Self::Rounded(grid_m) => grid_m,
            Self::Gaussian(_) => 1e-4,
        }
    }

    fn spoil(self, x: f64, random: &mut Random) -> f64 {
        match self {
            Self::Rounded(grid_m) => (x / grid_m).round() * grid_m,
            Self::Gaussian(deviation_m) => x + deviation_m * random.gaussian(),
        }
    }
}

/// xorshift64* (Vigna 2016) and the Box–Muller transform.
struct Random(u64);

impl Random {
    fn unit(&mut self) -> f64 {
        self.0 ^= self.0 >> 12;
        self.0 ^= self.0 << 25;
        self.0 ^= self.0 >> 27;
        (self.0.wrapping_mul(0x2545_F491_4F6C_DD1D) >> 11) as f64 / (1u64 << 53) as f64
    }

    fn gaussian(&mut self) -> f64 {
        let (a, b) = (self.unit().max(1e-300), self.unit());
        (-2.0 * a.ln()).sqrt() * (std::f64::consts::TAU * b).cos()
    }
}

/// How points are laid out and spoilt.
#[derive(Clone, Copy, Debug)]
struct Survey {
    spacing_m: f64,
    /// Spacings vary by this part.
    uneven: f64,
    end_u: f64,
    spoilt: Spoilt,
    fit: Fit,
    /// Whether the table's decimals show.
    grid_shows: bool,
}

impl Survey {
    fn spine(&self, seed: u64) -> Spine {
        let mut random = Random(seed.wrapping_mul(0x9E37_79B9_7F4A_7C15) | 1);
        let mut us = vec![self.spacing_m * random.unit()];
        while us[us.len() - 1] < self.end_u {
            let u = us[us.len() - 1];
            let step_m = self.spacing_m * (1.0 + self.uneven * (2.0 * random.unit() - 1.0));
            us.push(u + step_m / truth(u + 0.5 * step_m)[1].norm());
        }
        let mut spoil = |x: f64| self.spoilt.spoil(x, &mut random);
        let centre_m = us
            .iter()
            .map(|&u| truth(u)[0].map(&mut spoil))
            .collect::<Vec<_>>();
        let bank_left_rad = vec![0.0; centre_m.len()];
        let columns = Columns::Bank {
            centre_m,
            bank_left_rad,
        };
        let mut table = PointTable::new(columns, false, self.fit, place());
        table.grids.position_m = self.grid_shows.then(|| self.spoilt.grid_m());
        table.grids.attitude = Some(1e-12);
        let source = TrackSource::Points(table);
        let track = Track {
            name: "survey".into(),
            source,
            landmarks: vec![],
            place: place(),
        };
        Spine::from_track(&track).unwrap()
    }

    fn within(self) -> Self {
        let error_m = self.spoilt.deviation();
        Self {
            fit: Fit::Within {
                error_m,
                bank_error_rad: None,
            },
            ..self
        }
    }
}

/// Errors of a load along a spine, g, with margins.
#[derive(Clone, Copy, Debug, Default)]
struct Layer {
    count: f64,
    squares: f64,
    worst: f64,
    margins: f64,
    covered: f64,
}

impl Layer {
    fn add(&mut self, error: f64, margin: f64) {
        self.count += 1.0;
        self.squares += error * error;
        self.worst = self.worst.max(error.abs());
        self.margins += margin;
        self.covered += f64::from(error.abs() <= margin);
    }

    fn rms(&self) -> f64 {
        (self.squares / self.count).sqrt()
    }

    fn coverage(&self) -> f64 {
        self.covered / self.count
    }

    fn mean_margin(&self) -> f64 {
        self.margins / self.count
    }
}

/// Adds the errors of a spine, at points and half-way between them, to the interior and the ends.
fn add_errors(spine: &Spine, spacing_m: f64, interior: &mut Layer, ends: &mut Layer) {
    let end_m = END_M.max(END_POINTS * spacing_m);
    let (length_m, mut u) = (spine.length_m(), 0.0);
    for i in 0..(2.0 * length_m / spacing_m) as usize {
        let s = 0.5 * i as f64 * spacing_m;
        let point = spine.at(s);
        // The nearest point of the truth, by Newton's method from the one before.
        for _ in 0..8 {
            let [r, r1, _] = truth(u);
            u += (point.position_m - r).dot(&r1) / r1.norm_squared();
        }
        let error = G_PER_BEND * (point.curvature_1_m() - true_curvature(u));
        let margin = G_PER_BEND * spine.margin_at(s).bend_1_m;
        let layer = if s > end_m && s < length_m - end_m {
            &mut *interior
        } else {
            &mut *ends
        };
        layer.add(error, margin);
    }
}

const SURVEY: Survey = Survey {
    spacing_m: 0.25,
    uneven: 0.0,
    end_u: 330.0,
    spoilt: Spoilt::Rounded(0.001),
    fit: Fit::Auto,
    grid_shows: true,
};

fn interior(survey: Survey) -> Layer {
    let (mut interior, mut ends) = Default::default();
    add_errors(&survey.spine(1), survey.spacing_m, &mut interior, &mut ends);
    interior
}

/// Points rounded to 1 mm every 0.25 m, common in CAD output: interpolated they make several g of
/// noise; the fits bring it below what is asked of them.
#[test]
fn measured_points_rounded_to_a_millimetre() {
    let exact = interior(Survey {
        fit: Fit::Exact,
        ..SURVEY
    });
    assert!(exact.worst > 2.5 && exact.rms() > 0.8, "{exact:?}");
    for fit in [SURVEY.within(), SURVEY] {
        let found = interior(fit);
        assert!(
            found.worst <= 0.25 && found.rms() <= 0.015,
            "{fit:?}: {found:?}"
        );
    }
    let blind = interior(Survey {
        grid_shows: false,
        ..SURVEY
    });
    assert!(blind.rms() <= 0.03, "cross-validation: {blind:?}");
}

/// The table of README: run with `--nocapture` to print it.
#[test]
#[expect(clippy::print_stdout, reason = "the table is made to be read")]
fn measured_table_of_fits() {
    println!("| points | spacing | exact rms, worst | within | auto |");
    let kinds = [
        Spoilt::Rounded(0.001),
        Spoilt::Rounded(0.01),
        Spoilt::Gaussian(0.002),
    ];
    for spoilt in kinds {
        for spacing_m in [0.1, 0.25, 0.5, 1.0] {
            let survey = Survey {
                spoilt,
                spacing_m,
                ..SURVEY
            };
            let fits = [
                Survey {
                    fit: Fit::Exact,
                    ..survey
                },
                survey.within(),
                survey,
            ];
            let [exact, within, auto] = fits.map(interior);
            let cell = |l: &Layer| format!("{:.3}, {:.3}", l.rms(), l.worst);
            println!(
                "| {spoilt:?} | {spacing_m} m | {} | {} | {} |",
                cell(&exact),
                cell(&within),
                cell(&auto)
            );
            // Smoothing never adds noise, and takes most of it where points lie close.
            for smooth in [&within, &auto] {
                assert!(
                    smooth.rms() < 0.5 * exact.rms(),
                    "{survey:?}: {smooth:?}, {exact:?}"
                );
                assert!(
                    smooth.rms() < 0.15 && smooth.worst < 0.6,
                    "{survey:?}: {smooth:?}"
                );
            }
        }
    }
}

/// `auto` takes the grid where the residuals bear it out, and not where the points are worse than
/// their last digit.
#[test]
fn measured_auto_tells_rounding_from_survey_noise() {
    let report = |survey: Survey| survey.spine(3).fit().unwrap().clone();
    let rounded = report(SURVEY);
    assert_eq!(rounded.method, FitMethod::Grid);
    approx::assert_relative_eq!(
        rounded.error_m.unwrap(),
        0.001 / 12f64.sqrt(),
        epsilon = 1e-12
    );
    let surveyed = report(Survey {
        spoilt: Spoilt::Gaussian(0.002),
        ..SURVEY
    });
    assert_eq!(surveyed.method, FitMethod::CrossValidated);
    approx::assert_relative_eq!(surveyed.error_m.unwrap(), 0.002, max_relative = 0.05);
}

/// Two hundred replicates: two standard deviations hold the truth at 95 % of stations or more, in
/// the interior and in the end layer, and are not wide.
fn assert_honest(survey: Survey) {
    let (mut interior, mut ends) = (Layer::default(), Layer::default());
    for seed in 0..200 {
        add_errors(
            &survey.spine(seed),
            survey.spacing_m,
            &mut interior,
            &mut ends,
        );
    }
    let width = interior.mean_margin() / interior.rms();
    assert!(interior.coverage() >= 0.95, "{survey:?}: {interior:?}");
    assert!(ends.coverage() >= 0.95, "{survey:?}: {ends:?}");
    assert!(width <= 4.0, "{survey:?}: {interior:?}");
    assert!(
        ends.mean_margin() / ends.rms() <= 4.0,
        "{survey:?}: {ends:?}"
    );
}

const SHORT: Survey = Survey {
    end_u: 90.0,
    uneven: 0.3,
    ..SURVEY
};

#[test]
fn measured_margins_hold_for_rounding_stated() {
    assert_honest(SHORT.within());
}

#[test]
fn measured_margins_hold_for_rounding_found() {
    assert_honest(SHORT);
}

#[test]
fn measured_margins_hold_for_noise_stated() {
    assert_honest(
        Survey {
            spoilt: Spoilt::Gaussian(0.002),
            ..SHORT
        }
        .within(),
    );
}

#[test]
fn measured_margins_hold_for_noise_found() {
    assert_honest(Survey {
        spoilt: Spoilt::Gaussian(0.002),
        ..SHORT
    });
}
