//! Why a report cannot be made.

use crate::fault::Failure;

/// Why a report cannot be made. None of these is about the study: a wrong study never gets here.
#[derive(Debug)]
pub enum ReportError {
    /// A template cannot be read as a template, or asks for something that is not there. The message names
    /// the file, the line and the column.
    Template(String),
    /// A file in the user's folder of templates has a name that no template has.
    UnknownTemplate {
        /// The path of the file.
        path: String,
        /// The names that are known.
        known: Vec<&'static str>,
    },
    /// The stages before disagree: one names something that another does not have.
    Missing(String),
    /// The folder of templates or a file in it cannot be read.
    Failure(Failure),
}

impl std::fmt::Display for ReportError {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        match self {
            ReportError::Template(message) => write!(f, "a template is wrong: {message}"),
            ReportError::UnknownTemplate { path, known } => {
                write!(f, "no template has the name of `{path}`; the templates are {}", known.join(", "))
            }
            ReportError::Missing(what) => write!(f, "the report lacks {what}: this is a defect of halfstep"),
            ReportError::Failure(failure) => failure.fmt(f),
        }
    }
}

impl std::error::Error for ReportError {
    fn source(&self) -> Option<&(dyn std::error::Error + 'static)> {
        match self {
            ReportError::Failure(failure) => Some(failure),
            _ => None,
        }
    }
}

impl From<tera::Error> for ReportError {
    fn from(error: tera::Error) -> Self {
        ReportError::Template(error.to_string())
    }
}
