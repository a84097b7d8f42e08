//! Which studies are meant, and where their reports go.

use super::status::Status;
use std::collections::{BTreeMap, BTreeSet};
use std::fs::{self, File};
use std::io::{self, Read};
use std::path::{Path, PathBuf};
use walkdir::{DirEntry, WalkDir};

/// A study that was asked for.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct Found {
    /// Its file.
    pub path: PathBuf,
    /// The path as messages show it, with forward slashes.
    pub shown: String,
    /// The report folder below the output folder, with forward slashes: `deep/surge`.
    pub name: String,
}

/// Something that keeps a path from being a list of studies.
#[derive(Debug, PartialEq, Eq)]
pub(super) struct Trouble {
    pub(super) status: Status,
    pub(super) message: String,
}

impl Trouble {
    fn wrong(message: String) -> Self {
        Trouble { status: Status::Wrong, message }
    }
    fn failed(path: &Path, cause: &io::Error) -> Self {
        Trouble { status: Status::Failed, message: format!("cannot read {}: {cause}", path.display()) }
    }
}

/// The studies that `paths` name, files as they stand and folders with all studies in them, in the order of the
/// arguments and by path within a folder; each once.
///
/// # Errors
/// Everything that is wrong with the arguments: nothing there, no study in a folder, two studies whose reports
/// would have one place.
pub(super) fn find(paths: &[PathBuf]) -> Result<Vec<Found>, Vec<Trouble>> {
    let mut list = Vec::new();
    let mut troubles = Vec::new();
    for path in paths {
        match fs::metadata(path) {
            Ok(there) if there.is_dir() => in_folder(path, &mut list, &mut troubles),
            Ok(there) if there.is_file() => {
                let parent = path.parent().unwrap_or(Path::new(""));
                add(parent, path, &mut list, &mut troubles);
            }
            Ok(_) => {
                troubles.push(Trouble::wrong(format!("{} is neither a file nor a folder", path.display())));
            }
            Err(cause) if cause.kind() == io::ErrorKind::NotFound => {
                troubles.push(Trouble::wrong(format!("there is no file or folder {}", path.display())));
            }
            Err(cause) => troubles.push(Trouble::failed(path, &cause)),
        }
    }
    let list = each_once(list, &mut troubles);
    if troubles.is_empty() { Ok(list) } else { Err(troubles) }
}

fn in_folder(folder: &Path, list: &mut Vec<Found>, troubles: &mut Vec<Trouble>) {
    let (before, troubles_before) = (list.len(), troubles.len());
    let visible =
        |entry: &DirEntry| entry.depth() == 0 || !entry.file_name().as_encoded_bytes().starts_with(b".");
    for entry in WalkDir::new(folder).sort_by_file_name().into_iter().filter_entry(visible) {
        match entry {
            Ok(entry) if entry.file_type().is_file() && is_markdown(entry.path()) => {
                match is_study(entry.path()) {
                    Ok(true) => add(folder, entry.path(), list, troubles),
                    Ok(false) => {}
                    Err(cause) => troubles.push(Trouble::failed(entry.path(), &cause)),
                }
            }
            Ok(_) => {}
            Err(cause) => {
                let path = cause.path().unwrap_or(folder).to_path_buf();
                troubles.push(Trouble::failed(&path, &cause.into()));
            }
        }
    }
    if list.len() == before && troubles.len() == troubles_before {
        troubles.push(Trouble::wrong(format!(
            "there is no study in {}: a study is a .md file whose front matter has the key `study`",
            folder.display()
        )));
    }
}

fn is_markdown(path: &Path) -> bool {
    path.extension().is_some_and(|extension| extension.eq_ignore_ascii_case("md"))
}

/// Whether a file has front matter with the key `study`. What else is wrong with it is told when it is read.
fn is_study(path: &Path) -> io::Result<bool> {
    let mut start = Vec::new();
    File::open(path)?.take(65536).read_to_end(&mut start)?;
    Ok(has_study_key(&start))
}

fn has_study_key(start: &[u8]) -> bool {
    let start = start.strip_prefix(b"\xef\xbb\xbf").unwrap_or(start);
    let mut lines = start.split(|&byte| byte == b'\n').map(<[u8]>::trim_ascii_end);
    lines.next() == Some(b"---")
        && lines.take_while(|line| *line != b"---").any(|line| {
            let bare = [&b"study"[..], b"\"study\"", b"'study'"];
            let rest = bare.iter().find_map(|key| line.strip_prefix(*key));
            rest.is_some_and(|rest| rest.trim_ascii_start().starts_with(b":"))
        })
}

/// Adds the study `path`, whose report stands below the output folder as its file stands below `root`.
fn add(root: &Path, path: &Path, list: &mut Vec<Found>, troubles: &mut Vec<Trouble>) {
    let below = path.strip_prefix(root).unwrap_or(path);
    let (Some(name), Some(shown)) =
        (below.with_extension("").to_str().map(slashes), path.to_str().map(slashes))
    else {
        troubles.push(Trouble::wrong(format!("the path {} is not UTF-8: rename the file", path.display())));
        return;
    };
    if name.eq_ignore_ascii_case("index.html") {
        troubles.push(Trouble::wrong(format!(
            "{shown}: the report would stand where the register stands: rename the file"
        )));
        return;
    }
    list.push(Found { path: path.to_path_buf(), shown, name });
}

/// With forward slashes, and without the `./` that a walk through `.` gives.
fn slashes(path: &str) -> String {
    let path = path.replace(std::path::MAIN_SEPARATOR, "/");
    path.strip_prefix("./").map_or(path.clone(), str::to_owned)
}

/// Leaves out a file that was named before; two files for one place are an error.
fn each_once(list: Vec<Found>, troubles: &mut Vec<Trouble>) -> Vec<Found> {
    let mut files = BTreeSet::new();
    let mut places: BTreeMap<String, String> = BTreeMap::new();
    let mut kept = Vec::new();
    for found in list {
        let file = fs::canonicalize(&found.path).unwrap_or_else(|_| found.path.clone());
        if !files.insert(file) {
            continue;
        }
        if let Some(other) = places.insert(found.name.clone(), found.shown.clone()) {
            troubles.push(Trouble::wrong(format!(
                "{other} and {} would both be issued to {}: rename one, or issue them into different folders by --out",
                found.shown, found.name
            )));
        }
        kept.push(found);
    }
    kept
}

#[cfg(test)]
#[expect(clippy::disallowed_methods, reason = "the tests lay out folders to search")]
mod tests {
    use super::*;

    const STUDY: &str = "---\nnumber: 1\nstudy: S\n---\n";

    fn laid_out(files: &[(&str, &str)]) -> tempfile::TempDir {
        let root = tempfile::tempdir().unwrap();
        for (path, text) in files {
            let path = root.path().join(path);
            fs::create_dir_all(path.parent().unwrap()).unwrap();
            fs::write(path, text).unwrap();
        }
        root
    }

    fn names(paths: &[PathBuf]) -> Vec<String> {
        find(paths).unwrap().into_iter().map(|found| found.name).collect()
    }

    fn messages(paths: &[PathBuf]) -> Vec<String> {
        find(paths).unwrap_err().into_iter().map(|trouble| trouble.message).collect()
    }

    #[test]
    fn a_study_is_known_by_its_front_matter() {
        for (text, expected) in [
            (STUDY, true),
            ("---\r\nstudy: S\r\n---\r\n", true),
            ("\u{feff}---\nstudy : S\n---\n", true),
            ("---\n\"study\": S\n---\n", true),
            ("---\nstudy: S\n", true),
            ("---\nstudying: S\n---\n", false),
            ("---\ntitle: S\n---\nstudy: S\n", false),
            ("study: S\n", false),
            ("\n---\nstudy: S\n---\n", false),
            ("", false),
        ] {
            assert_eq!(has_study_key(text.as_bytes()), expected, "{text:?}");
        }
    }

    #[test]
    fn a_folder_gives_its_studies_by_path_and_keeps_its_folders() {
        let root = laid_out(&[
            ("s/b.md", STUDY),
            ("s/a/z.md", STUDY),
            ("s/a.txt", STUDY),
            ("s/readme.md", "# no study\n"),
            ("s/.hidden/x.md", STUDY),
            ("s/c.v2.md", STUDY),
        ]);
        assert_eq!(names(&[root.path().join("s")]), ["a/z", "b", "c.v2"]);
        assert_eq!(names(&[root.path().join("s/a/z.md")]), ["z"]);
    }

    #[test]
    fn a_path_is_shown_with_forward_slashes_and_no_dot_before_it() {
        assert_eq!(slashes("./a/b.md"), "a/b.md");
        assert_eq!(slashes("../a.md"), "../a.md");
        assert_eq!(slashes(".a.md"), ".a.md");
    }

    #[test]
    fn a_file_named_twice_is_issued_once() {
        let root = laid_out(&[("s/a.md", STUDY)]);
        let (folder, file) = (root.path().join("s"), root.path().join("s/../s/a.md"));
        assert_eq!(names(&[folder.clone(), file, folder]), ["a"]);
    }

    #[test]
    fn two_studies_for_one_place_are_an_error_that_names_both() {
        let root = laid_out(&[("s/a.md", STUDY), ("r/a.md", STUDY)]);
        let messages = messages(&[root.path().join("s"), root.path().join("r/a.md")]);
        assert_eq!(messages.len(), 1);
        assert!(
            messages[0].contains("s/a.md and ") && messages[0].contains("r/a.md would both"),
            "{messages:?}"
        );
    }

    #[test]
    fn everything_wrong_with_the_arguments_is_told_at_once() {
        let root = laid_out(&[("s/readme.md", "text"), ("t/index.html.md", STUDY)]);
        let messages = messages(&[
            root.path().join("none.md"),
            root.path().join("s"),
            root.path().join("t/index.html.md"),
        ]);
        assert_eq!(messages.len(), 3, "{messages:?}");
        assert!(messages[0].starts_with("there is no file or folder"));
        assert!(messages[1].starts_with("there is no study in"));
        assert!(messages[2].contains("where the register stands"));
    }

    #[cfg(unix)]
    #[test]
    fn links_in_a_folder_are_not_followed() {
        let root = laid_out(&[("s/a.md", STUDY), ("far/b.md", STUDY)]);
        std::os::unix::fs::symlink(root.path().join("far"), root.path().join("s/far")).unwrap();
        std::os::unix::fs::symlink(root.path().join("far/b.md"), root.path().join("s/b.md")).unwrap();
        assert_eq!(names(&[root.path().join("s")]), ["a"]);
    }
}
