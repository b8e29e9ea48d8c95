//! Crestfall: rider loads of coasters and track rides against acceptance envelopes.
//!
//! Data flows one way; each step is a function from values to a value:
//!
//! 1. [`input`] reads files: [`input::Study`];
//! 2. [`spine`] makes the reference curve of a track: [`spine::Spine`];
//! 3. [`train`] sets the cars on it: [`train::Poses`];
//! 4. [`motion`] runs the train: [`motion::History`];
//! 5. [`loads`] works out what each rider feels: [`loads::CarLoads`];
//! 6. [`envelope`] holds it against rules: a judgement a rule;
//! 7. [`study`] does so for all variants, scenarios and seats;
//! 8. [`report`] writes it down.
//!
//! ```
//! use crestfall::study::{Selection, assess};
//!
//! let path = std::path::Path::new("demo-tracks/saltglass/saltglass.study.yaml");
//! let study = crestfall::input::read_study(path).expect("the demo is well formed");
//! let selection = Selection {
//!     variants: vec!["eased".into()],
//!     scenarios: vec!["warm-full".into()],
//!     seats: vec!["1-front-left".into()],
//! };
//! let assessment = assess(&study, &selection, &|_, _| ()).expect("the files fit together");
//! assert_eq!(assessment.outcome.to_string(), "inside");
//! ```
//!
//! | what | convention |
//! | --- | --- |
//! | world axes | x east, y north, z up |
//! | spine axes | t forward, l left, u up: right-handed |
//! | car axes | forward (rear axle to front axle), left, up; origin midway between the axles |
//! | rider axes | ISO 8727: x forward (eyes back), y left, z headward (eyes down) |
//! | bank, turn, offsets | positive to the left inside; written with a side in files |
//! | units | SI inside, named in identifiers; loads in g₀ = 9.80665 m/s² |

pub mod diagnostic;
pub mod envelope;
pub mod input;
pub mod loads;
pub mod motion;
pub mod numerics;
pub mod report;
pub mod spine;
pub mod study;
pub mod train;

/// Standard acceleration of free fall, m/s² (CGPM 1901; ISO 80000-3).
pub const STANDARD_GRAVITY_M_S2: f64 = 9.806_65;
