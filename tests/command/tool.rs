//! Runs the binary in a folder of its own.

use std::collections::BTreeMap;
use std::fs;
use std::path::Path;
use std::process::{Command, Output, Stdio};
use tempfile::TempDir;

/// A folder in which the binary is run.
pub(crate) struct Tool {
    pub(crate) folder: TempDir,
}

/// What came of a run of the binary.
#[derive(Debug)]
pub(crate) struct Done {
    pub(crate) status: i32,
    pub(crate) out: String,
    pub(crate) err: String,
}

impl Tool {
    /// In an empty folder.
    pub(crate) fn new() -> Self {
        Tool { folder: tempfile::tempdir().unwrap() }
    }

    /// Writes a file, with its folders.
    pub(crate) fn file(&self, path: &str, text: impl AsRef<[u8]>) {
        let path = self.folder.path().join(path);
        fs::create_dir_all(path.parent().unwrap()).unwrap();
        #[expect(clippy::disallowed_methods, reason = "a test lays out its own folder")]
        fs::write(path, text).unwrap();
    }

    /// The binary, ready to be started with arguments that stand apart by blanks.
    pub(crate) fn command(&self, arguments: &str) -> Command {
        let mut command = Command::new(env!("CARGO_BIN_EXE_halfstep"));
        command.args(arguments.split_whitespace()).current_dir(self.folder.path()).stdin(Stdio::null());
        command
    }

    /// Runs the binary to its end.
    pub(crate) fn run(&self, arguments: &str) -> Done {
        Done::of(self.command(arguments).output().unwrap())
    }

    /// Runs the binary and asserts its exit status.
    pub(crate) fn expect(&self, status: i32, arguments: &str) -> Done {
        let done = self.run(arguments);
        assert_eq!(done.status, status, "halfstep {arguments}: {done:#?}");
        done
    }

    /// Every file below a path of the folder with its bytes.
    pub(crate) fn files(&self, path: &str) -> BTreeMap<String, Vec<u8>> {
        let root = self.folder.path().join(path);
        files_below(&root)
    }
}

impl Done {
    pub(crate) fn of(output: Output) -> Self {
        Done {
            status: output.status.code().unwrap_or(-1),
            out: String::from_utf8(output.stdout).unwrap(),
            err: String::from_utf8(output.stderr).unwrap(),
        }
    }
}

/// Every file below a folder with its bytes; empty where there is no folder.
pub(crate) fn files_below(root: &Path) -> BTreeMap<String, Vec<u8>> {
    if !root.exists() {
        return BTreeMap::new();
    }
    walkdir::WalkDir::new(root)
        .into_iter()
        .map(Result::unwrap)
        .filter(|entry| !entry.file_type().is_dir())
        .map(|entry| {
            let path = entry.path().strip_prefix(root).unwrap().to_str().unwrap().to_owned();
            (path, fs::read(entry.path()).unwrap())
        })
        .collect()
}
