//! JSON Schemas of the files, made from the types that read them.

use schemars::generate::SchemaSettings;

use crate::input::FileKind;
use crate::input::written::envelope::EnvelopeFile;
use crate::input::written::operation::OperationFile;
use crate::input::written::study::StudyFile;
use crate::input::written::track::TrackFile;
use crate::input::written::train::TrainFile;

/// The JSON Schema (draft 2020-12) of a kind of file, for editors.
///
/// It holds keys, words and the forms of quantities; what a number may be is
/// checked when a file is read.
pub fn schema(kind: FileKind) -> serde_json::Value {
    let generator = SchemaSettings::draft2020_12().into_generator();
    let schema = match kind {
        FileKind::Study => generator.into_root_schema_for::<StudyFile>(),
        FileKind::Track => generator.into_root_schema_for::<TrackFile>(),
        FileKind::Train => generator.into_root_schema_for::<TrainFile>(),
        FileKind::Operation => generator.into_root_schema_for::<OperationFile>(),
        FileKind::Envelope => generator.into_root_schema_for::<EnvelopeFile>(),
    };
    schema.to_value()
}
