//! All writing to disk.
//!
//! A report folder is written whole into a folder beside its place, every file flushed to the disk, and then
//! takes the place of the old one in one step. So a full disk, a refused permission or a
//! stop at any moment leaves the old report or the new one. What the last issue wrote and this one does not
//! (data of a run that is gone) is not in the new folder; what somebody else put into the old folder, reports
//! of other studies included, is carried over by hard links.
//!
//! One folder is written at a time. Two processes that issue the same study into the same place at the same
//! time are not foreseen: one of them may fail, neither leaves a part.

use super::swap;
use super::timing::Timing;
use crate::fault::Failure;
use std::collections::BTreeSet;
use std::fs::{self, File};
use std::io::{self, Write};
use std::path::{Component, Path, PathBuf};
use std::sync::{Mutex, PoisonError};
use tempfile::{Builder, TempDir};

/// A file of a report folder.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct NewFile {
    /// Its path in the report folder, with forward slashes: `data/reject.csv`.
    pub path: String,
    /// Its bytes.
    pub bytes: Vec<u8>,
}

/// What is about to happen; the tests fail here, or look at the disk.
#[derive(Clone, Debug, PartialEq, Eq)]
enum Step {
    MakeFolder,
    WriteFile(String),
    CarryOver(PathBuf),
    Swap,
    RemoveOld,
}

type Watch<'a> = &'a mut dyn FnMut(&Step) -> io::Result<()>;

/// Swaps wait for each other: a report folder may hold the report folder of another study.
static ONE_AT_A_TIME: Mutex<()> = Mutex::new(());

/// Makes `place` a folder with these files, old or new at every moment.
///
/// # Errors
/// [`Failure`] with the path and the cause; `place` is then as it was.
pub fn folder(place: &Path, files: &[NewFile]) -> Result<(), Failure> {
    folder_watched(place, files, &mut |_| Ok(()))
}

fn folder_watched(place: &Path, files: &[NewFile], watch: Watch<'_>) -> Result<(), Failure> {
    let _turn = ONE_AT_A_TIME.lock().unwrap_or_else(PoisonError::into_inner);
    let place = &behind_link(place)?;
    let Some((parent, name)) = parent_and_name(place) else {
        return Err(Failure::new(cannot_write(place), io::ErrorKind::InvalidInput.into()));
    };
    fs::create_dir_all(parent).map_err(|cause| Failure::new(cannot_make(parent), cause))?;
    swap::recover(place).map_err(|cause| Failure::new(cannot_write(place), cause))?;
    let old = old_folder(place)?;

    let prefix = format!(".{name}{STAGED}");
    sweep(parent, &prefix);
    let staged = watch(&Step::MakeFolder)
        .and_then(|()| staging_folder(&prefix, parent))
        .map_err(|cause| Failure::new(format!("cannot make a folder in {}", parent.display()), cause))?;
    for file in files {
        watch(&Step::WriteFile(file.path.clone()))
            .and_then(|()| write_new(staged.path(), file))
            .map_err(|cause| Failure::new(cannot_write(&place.join(&file.path)), cause))?;
    }
    if let Some(old) = &old {
        carry_over(place, staged.path(), files, watch)?;
        fs::set_permissions(staged.path(), old.permissions())
            .map_err(|cause| Failure::new(cannot_write(place), cause))?;
    }
    flush_folders(staged.path()).map_err(|cause| Failure::new(cannot_write(place), cause))?;
    watch(&Step::Swap)
        .and_then(|()| swap::swap(staged.path(), place))
        .map_err(|cause| Failure::new(cannot_write(place), cause))?;
    // From here on the new report is in place: what fails now leaves a hidden folder, which the next issue sweeps.
    let _ = flush_folder(parent);
    let removable = watch(&Step::RemoveOld).is_ok();
    let left = staged.keep();
    if old.is_some() && removable {
        let _ = fs::remove_dir_all(left);
    }
    Ok(())
}

/// Makes `place` a file with these bytes, old or new at every moment.
///
/// # Errors
/// [`Failure`] with the path and the cause; `place` is then as it was.
pub fn file(place: &Path, bytes: &[u8]) -> Result<(), Failure> {
    write_beside(place, bytes)
        .and_then(|file| file.persist(place).map_err(|refused| refused.error))
        .map_err(|cause| Failure::new(cannot_write(place), cause))?;
    Ok(())
}

/// As [`file()`], where nothing stands at `place` yet.
///
/// # Errors
/// [`Failure`] with the path and the cause, of kind `AlreadyExists` where something stands there.
pub fn new_file(place: &Path, bytes: &[u8]) -> Result<(), Failure> {
    write_beside(place, bytes)
        .and_then(|file| file.persist_noclobber(place).map_err(|refused| refused.error))
        .map_err(|cause| Failure::new(cannot_write(place), cause))?;
    Ok(())
}

/// Marks the folders in which reports are made; between the name of the report and random letters.
const STAGED: &str = ".halfstep-";

fn cannot_write(place: &Path) -> String {
    format!("cannot write {}", place.display())
}

fn cannot_make(folder: &Path) -> String {
    format!("cannot make the folder {}", folder.display())
}

/// The folder that a link at `place` leads to, so that the link stays.
fn behind_link(place: &Path) -> Result<PathBuf, Failure> {
    match fs::symlink_metadata(place) {
        Ok(found) if found.is_symlink() => {
            fs::canonicalize(place).map_err(|cause| Failure::new(cannot_write(place), cause))
        }
        _ => Ok(place.to_path_buf()),
    }
}

fn parent_and_name(place: &Path) -> Option<(&Path, &str)> {
    let parent = place.parent()?;
    let parent = if parent.as_os_str().is_empty() { Path::new(".") } else { parent };
    Some((parent, place.file_name()?.to_str()?))
}

/// What is known of the folder at `place`; `None` where there is none.
fn old_folder(place: &Path) -> Result<Option<fs::Metadata>, Failure> {
    let refuse = |kind, cause: &str| Err(Failure::new(cannot_write(place), io::Error::new(kind, cause)));
    match fs::symlink_metadata(place) {
        Ok(found) if !found.is_dir() => {
            refuse(io::ErrorKind::NotADirectory, "a file stands where the report folder belongs")
        }
        // Whoever took the right to write away wants to keep this report.
        Ok(found) if found.permissions().readonly() => {
            refuse(io::ErrorKind::PermissionDenied, "the folder is read-only")
        }
        Ok(found) => Ok(Some(found)),
        Err(cause) if cause.kind() == io::ErrorKind::NotFound => Ok(None),
        Err(cause) => Err(Failure::new(cannot_write(place), cause)),
    }
}

/// Removes what earlier issues of this report have left when they were stopped.
fn sweep(parent: &Path, prefix: &str) {
    let Ok(entries) = fs::read_dir(parent) else { return };
    for entry in entries.flatten() {
        if entry.file_name().to_string_lossy().starts_with(prefix) {
            let is_folder = entry.file_type().is_ok_and(|kind| kind.is_dir());
            let _ = if is_folder { fs::remove_dir_all(entry.path()) } else { fs::remove_file(entry.path()) };
        }
    }
}

fn staging_folder(prefix: &str, parent: &Path) -> io::Result<TempDir> {
    let mut builder = Builder::new();
    builder.prefix(prefix);
    #[cfg(unix)]
    {
        use std::os::unix::fs::PermissionsExt;
        // The user's umask decides, as for any folder.
        builder.permissions(fs::Permissions::from_mode(0o777));
        builder.tempdir_in(parent)
    }
    #[cfg(not(unix))]
    builder.tempdir_in(parent)
}

fn write_beside(place: &Path, bytes: &[u8]) -> io::Result<tempfile::NamedTempFile> {
    let Some((parent, name)) = parent_and_name(place) else {
        return Err(io::ErrorKind::InvalidInput.into());
    };
    let prefix = format!(".{name}{STAGED}");
    sweep(parent, &prefix);
    let mut builder = Builder::new();
    builder.prefix(&prefix);
    #[cfg(unix)]
    {
        use std::os::unix::fs::PermissionsExt;
        builder.permissions(fs::Permissions::from_mode(0o666));
    }
    let mut file = builder.tempfile_in(parent)?;
    file.write_all(bytes)?;
    file.as_file().sync_all()?;
    Ok(file)
}

fn write_new(folder: &Path, file: &NewFile) -> io::Result<()> {
    let path = Path::new(&file.path);
    if file.path.is_empty() || !path.components().all(|part| matches!(part, Component::Normal(_))) {
        return Err(io::Error::new(io::ErrorKind::InvalidInput, "the path leads out of the report folder"));
    }
    let path = folder.join(path);
    if let Some(parent) = path.parent() {
        fs::create_dir_all(parent)?;
    }
    let mut to = File::create_new(path)?;
    to.write_all(&file.bytes)?;
    to.sync_all()
}

/// Links into `staged` what stands in `place` and is not of the last issue.
fn carry_over(place: &Path, staged: &Path, files: &[NewFile], watch: Watch<'_>) -> Result<(), Failure> {
    let mut ours = written_by_last_issue(place);
    ours.extend(files.iter().map(|file| file.path.clone()));
    let is_staging = |entry: &walkdir::DirEntry| {
        let name = entry.file_name().to_string_lossy();
        entry.depth() > 0 && entry.file_type().is_dir() && name.starts_with('.') && name.contains(STAGED)
    };
    let walk = walkdir::WalkDir::new(place).min_depth(1).sort_by_file_name();
    for entry in walk.into_iter().filter_entry(|entry| !is_staging(entry)) {
        let entry = entry.map_err(|cause| Failure::new(cannot_read(place), cause.into()))?;
        let Ok(path) = entry.path().strip_prefix(place) else { continue };
        if ours.contains(path.to_string_lossy().replace('\\', "/").as_str()) {
            continue;
        }
        watch(&Step::CarryOver(path.to_path_buf()))
            .and_then(|()| carry(&entry, path, staged))
            .map_err(|cause| Failure::new(format!("cannot keep {}", entry.path().display()), cause))?;
    }
    Ok(())
}

fn cannot_read(place: &Path) -> String {
    format!("cannot read {}", place.display())
}

fn carry(entry: &walkdir::DirEntry, path: &Path, staged: &Path) -> io::Result<()> {
    let to = staged.join(path);
    if entry.file_type().is_dir() {
        // The folder of the data goes when its last file goes.
        return if path == Path::new("data") { Ok(()) } else { fs::create_dir_all(to) };
    }
    if let Some(parent) = to.parent() {
        fs::create_dir_all(parent)?;
    }
    #[cfg(unix)]
    if entry.path_is_symlink() {
        return std::os::unix::fs::symlink(fs::read_link(entry.path())?, to);
    }
    // A link where the file system has links, else a copy.
    fs::hard_link(entry.path(), &to).or_else(|_| fs::copy(entry.path(), &to).map(|_| ()))
}

/// The files of a report, and what the record in `place` lists as written.
fn written_by_last_issue(place: &Path) -> BTreeSet<String> {
    let mut ours: BTreeSet<String> =
        ["report.html", "record.json", Timing::FILE].map(str::to_owned).into_iter().collect();
    let record = fs::read(place.join("record.json")).ok();
    let record = record.and_then(|bytes| serde_json::from_slice::<serde_json::Value>(&bytes).ok());
    let files = record.as_ref().and_then(|record| record.get("files")).and_then(|files| files.as_array());
    for file in files.into_iter().flatten() {
        if file.get("was").and_then(|was| was.as_str()) == Some("written") {
            ours.extend(file.get("path").and_then(|path| path.as_str()).map(str::to_owned));
        }
    }
    ours
}

fn flush_folders(root: &Path) -> io::Result<()> {
    for entry in walkdir::WalkDir::new(root).contents_first(true) {
        let entry = entry?;
        if entry.file_type().is_dir() {
            flush_folder(entry.path())?;
        }
    }
    Ok(())
}

/// Makes the names in a folder last. Some file systems cannot flush a folder and need not.
fn flush_folder(folder: &Path) -> io::Result<()> {
    if cfg!(unix) {
        match File::open(folder)?.sync_all() {
            Err(cause)
                if matches!(cause.kind(), io::ErrorKind::InvalidInput | io::ErrorKind::Unsupported) => {}
            other => return other,
        }
    }
    Ok(())
}

#[cfg(test)]
mod tests;
