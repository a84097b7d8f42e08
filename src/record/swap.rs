//! Puts a finished folder in the place of another in one step.

use std::io;
use std::path::{Path, PathBuf};

/// Makes the folder `new` stand at `place`. Where a folder stood there, it stands at `new` afterwards.
///
/// On Linux and on Apple systems the two names are exchanged by one call of the system, so that at every
/// moment one whole folder stands at `place`. Where the system or the file system cannot do that, the old
/// folder is first renamed to [`set_aside`]: a stop between the two renames leaves nothing at `place`, and
/// [`recover`] brings the old folder back.
pub(super) fn swap(new: &Path, place: &Path) -> io::Result<()> {
    if std::fs::symlink_metadata(place).is_err() {
        return std::fs::rename(new, place);
    }
    match exchange(new, place) {
        Err(cause) if is_lacking(&cause) => rename_twice(new, place),
        other => other,
    }
}

/// Where the old folder waits while the new one is renamed, when the system cannot exchange.
pub(super) fn set_aside(place: &Path) -> PathBuf {
    let name = place.file_name().unwrap_or_default().to_string_lossy();
    place.with_file_name(format!(".{name}.halfstep.last"))
}

/// Brings back an old folder that a stop between two renames has left aside.
pub(super) fn recover(place: &Path) -> io::Result<()> {
    let aside = set_aside(place);
    if std::fs::symlink_metadata(&aside).is_err() {
        return Ok(());
    }
    if std::fs::symlink_metadata(place).is_err() {
        std::fs::rename(&aside, place)
    } else {
        std::fs::remove_dir_all(&aside)
    }
}

fn rename_twice(new: &Path, place: &Path) -> io::Result<()> {
    let aside = set_aside(place);
    std::fs::rename(place, &aside)?;
    if let Err(cause) = std::fs::rename(new, place) {
        std::fs::rename(&aside, place)?;
        return Err(cause);
    }
    std::fs::rename(&aside, new)
}

fn is_lacking(cause: &io::Error) -> bool {
    matches!(cause.kind(), io::ErrorKind::Unsupported | io::ErrorKind::InvalidInput)
}

#[cfg(any(target_os = "linux", target_vendor = "apple"))]
fn exchange(a: &Path, b: &Path) -> io::Result<()> {
    use rustix::fs::{CWD, RenameFlags, renameat_with};
    Ok(renameat_with(CWD, a, CWD, b, RenameFlags::EXCHANGE)?)
}

#[cfg(not(any(target_os = "linux", target_vendor = "apple")))]
fn exchange(_a: &Path, _b: &Path) -> io::Result<()> {
    Err(io::ErrorKind::Unsupported.into())
}

#[cfg(test)]
#[expect(clippy::disallowed_methods, reason = "the tests lay out folders to swap")]
mod tests {
    use super::*;
    use std::fs::{create_dir, read_to_string, write};

    fn two_folders() -> (tempfile::TempDir, PathBuf, PathBuf) {
        let root = tempfile::tempdir().unwrap();
        let (new, place) = (root.path().join("new"), root.path().join("place"));
        for (folder, text) in [(&new, "new"), (&place, "old")] {
            create_dir(folder).unwrap();
            write(folder.join("report.html"), text).unwrap();
        }
        (root, new, place)
    }

    fn reads(folder: &Path) -> String {
        read_to_string(folder.join("report.html")).unwrap()
    }

    #[test]
    fn both_ways_leave_the_new_folder_in_place_and_the_old_one_where_it_was_made() {
        for way in [swap, rename_twice] {
            let (_root, new, place) = two_folders();
            way(&new, &place).unwrap();
            assert_eq!((reads(&place), reads(&new)), ("new".to_owned(), "old".to_owned()));
        }
    }

    #[test]
    fn a_second_rename_that_fails_brings_the_old_folder_back() {
        let (_root, new, place) = two_folders();
        std::fs::remove_dir_all(&new).unwrap();
        assert!(rename_twice(&new, &place).is_err());
        assert_eq!(reads(&place), "old");
    }

    #[test]
    fn an_old_folder_left_aside_is_brought_back() {
        let (_root, _new, place) = two_folders();
        std::fs::rename(&place, set_aside(&place)).unwrap();
        recover(&place).unwrap();
        assert_eq!(reads(&place), "old");
        recover(&place).unwrap();
    }

    #[test]
    fn a_folder_left_aside_is_removed_when_the_new_one_is_in_place() {
        let (_root, new, place) = two_folders();
        std::fs::rename(&place, set_aside(&place)).unwrap();
        std::fs::rename(&new, &place).unwrap();
        recover(&place).unwrap();
        assert_eq!(reads(&place), "new");
        assert!(!set_aside(&place).exists());
    }
}
