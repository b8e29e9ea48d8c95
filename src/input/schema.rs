//! JSON Schemas of the files, made from the types that read them.

use schemars::Schema;
use schemars::generate::SchemaSettings;
use schemars::transform::RecursiveTransform;
use serde_json::{Value, json};

use crate::input::FileKind;
use crate::input::written::envelope::EnvelopeFile;
use crate::input::written::operation::OperationFile;
use crate::input::written::study::StudyFile;
use crate::input::written::track::TrackFile;
use crate::input::written::train::TrainFile;

/// The JSON Schema (draft 2020-12) of a kind of file, for editors.
///
/// It holds keys, words, which keys need or exclude each other and the forms of
/// quantities; what a value means is checked when a file is read.
pub fn schema(kind: FileKind) -> Value {
    let mut settings = SchemaSettings::draft2020_12();
    settings
        .transforms
        .push(Box::new(RecursiveTransform(refuse_nothing)));
    let generator = settings.into_generator();
    let mut schema = match kind {
        FileKind::Study => generator.into_root_schema_for::<StudyFile>(),
        FileKind::Track => generator.into_root_schema_for::<TrackFile>(),
        FileKind::Train => generator.into_root_schema_for::<TrainFile>(),
        FileKind::Operation => generator.into_root_schema_for::<OperationFile>(),
        FileKind::Envelope => generator.into_root_schema_for::<EnvelopeFile>(),
    };
    describe(&mut schema);
    schema.to_value()
}

/// A key may be left out, but one that is there has a value.
fn refuse_nothing(schema: &mut Schema) {
    let nothing = json!({"type": "null"});
    if let Some(Value::Array(mut choices)) = schema.remove("anyOf") {
        choices.retain(|choice| *choice != nothing);
        match <[Value; 1]>::try_from(choices) {
            Ok([Value::Object(only)]) => schema.ensure_object().extend(only),
            Ok([other]) => drop(schema.insert("anyOf".to_owned(), json!([other]))),
            Err(several) => drop(schema.insert("anyOf".to_owned(), several.into())),
        }
    }
    if let Some(Value::Array(types)) = schema.get_mut("type") {
        types.retain(|name| name != "null");
        if let [only] = &types[..] {
            let only = only.clone();
            schema.insert("type".to_owned(), only);
        }
    }
}

/// Adds to the description of the whole how an editor comes to use it.
///
/// The line is the one that the YAML language servers of common editors read (common practice).
fn describe(schema: &mut Schema) {
    let text = |key| schema.get(key).and_then(Value::as_str).unwrap_or_default();
    let kind = text("title");
    let description = format!(
        "{}\n\nWrite this schema to a file with `crestfall schema {kind} > {kind}.schema.json` and begin \
         a {kind} file with the line `# yaml-language-server: $schema={kind}.schema.json`: an editor then \
         completes and checks it.",
        text("description")
    );
    schema.insert("description".to_owned(), description.into());
}
