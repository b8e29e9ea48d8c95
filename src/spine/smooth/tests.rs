//! The choice of λ against a dense minimisation: `tests/reference/smoothing/SOURCE.md`.

use serde::Deserialize;

use super::*;

#[derive(Deserialize)]
struct Reference {
    choices: Vec<Choice>,
}

#[derive(Deserialize)]
struct Choice {
    x: Vec<f64>,
    weights: Vec<f64>,
    y: Vec<[f64; 2]>,
    error: f64,
    cross_validated_ln: f64,
    found_error: f64,
    least_risk_ln: f64,
    matched_ln: f64,
}

fn choices() -> Vec<Choice> {
    let text = include_str!("../../../tests/reference/smoothing/reference.json");
    let reference: Reference = serde_json::from_str(text).unwrap();
    assert_eq!(reference.choices.len(), 3);
    reference.choices
}

impl Choice {
    fn data(&self) -> Data<'_, 2> {
        Data {
            parameters: &self.x,
            period: None,
            values: &self.y,
            weights: &self.weights,
            across: false,
        }
    }
}

#[track_caller]
fn expect(found: Result<f64, IllConditioned>, expected: f64) {
    let found = found.unwrap();
    assert!(
        (found - expected).abs() <= LAMBDA_TOLERANCE,
        "{found}, {expected}"
    );
}

#[test]
fn published_choices_are_those_of_a_dense_minimisation() {
    for choice in choices() {
        let data = choice.data();
        let trials = Trials::new(&data);
        expect(trials.cross_validated(), choice.cross_validated_ln);
        expect(trials.least_risk(choice.error), choice.least_risk_ln);
        expect(trials.matching(choice.error), choice.matched_ln);
    }
}

/// λ off by its tolerance moves the error by far less than a part in a thousand.
#[test]
fn published_error_found_is_that_of_the_dense_minimum() {
    for choice in choices() {
        let found = choice.data().cross_validated().unwrap().error;
        approx::assert_relative_eq!(found, choice.found_error, max_relative = 1e-3);
    }
}
