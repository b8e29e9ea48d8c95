//! All cases of a study.
