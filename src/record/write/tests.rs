//! Writing with failures at every step, and a look at the disk before every step.

#![expect(clippy::disallowed_methods, reason = "the tests lay out folders")]

use super::*;
use std::collections::BTreeMap;

const RECORD: &str =
    r#"{"files": [{"was": "written", "path": "data/gone.csv"}, {"was": "read", "path": "note.txt"}]}"#;

fn new_file_of(path: &str, text: &str) -> NewFile {
    NewFile { path: path.to_owned(), bytes: text.as_bytes().to_vec() }
}

fn new_files() -> Vec<NewFile> {
    [("data/kept.csv", "new"), ("record.json", "{}"), ("report.html", "new"), ("timing.txt", "new")]
        .map(|(path, text)| new_file_of(path, text))
        .to_vec()
}

/// A place with an old report, a file of the user, and the report of another study below it.
fn with_old_report() -> (TempDir, PathBuf) {
    let root = tempfile::tempdir().unwrap();
    let place = root.path().join("out/surge");
    for (path, text) in [
        ("report.html", "old"),
        ("record.json", RECORD),
        ("data/kept.csv", "old"),
        ("data/gone.csv", "old"),
        ("data/mine.csv", "mine"),
        ("note.txt", "mine"),
        ("variant/report.html", "other"),
    ] {
        let path = place.join(path);
        fs::create_dir_all(path.parent().unwrap()).unwrap();
        fs::write(path, text).unwrap();
    }
    (root, place)
}

/// Every file below a folder with its text.
fn contents(folder: &Path) -> BTreeMap<String, String> {
    walkdir::WalkDir::new(folder)
        .into_iter()
        .map(Result::unwrap)
        .filter(|entry| entry.file_type().is_file())
        .map(|entry| {
            let path = entry.path().strip_prefix(folder).unwrap().to_str().unwrap().to_owned();
            (path, fs::read_to_string(entry.path()).unwrap())
        })
        .collect()
}

fn new_contents() -> BTreeMap<String, String> {
    [
        ("data/kept.csv", "new"),
        ("data/mine.csv", "mine"),
        ("note.txt", "mine"),
        ("record.json", "{}"),
        ("report.html", "new"),
        ("timing.txt", "new"),
        ("variant/report.html", "other"),
    ]
    .map(|(path, text)| (path.to_owned(), text.to_owned()))
    .into_iter()
    .collect()
}

#[test]
fn a_first_report_makes_its_folders() {
    let root = tempfile::tempdir().unwrap();
    let place = root.path().join("out/deep/surge");
    folder(&place, &new_files()).unwrap();
    assert_eq!(contents(&place).len(), 4);
    assert_eq!(fs::read_dir(place.parent().unwrap()).unwrap().count(), 1);
}

#[test]
fn a_new_report_replaces_what_the_last_one_wrote_and_keeps_what_others_wrote() {
    let (_root, place) = with_old_report();
    folder(&place, &new_files()).unwrap();
    assert_eq!(contents(&place), new_contents());
    assert_eq!(fs::read_dir(place.parent().unwrap()).unwrap().count(), 1, "nothing is left beside it");
}

#[test]
fn the_old_report_or_the_new_one_stands_whole_at_every_step() {
    let (_root, place) = with_old_report();
    let old = contents(&place);
    let mut seen = Vec::new();
    folder_watched(&place, &new_files(), &mut |step| {
        seen.push((step.clone(), contents(&place)));
        Ok(())
    })
    .unwrap();
    assert!(seen.len() > 8, "{seen:?}");
    for (step, there) in seen {
        let expected = if step == Step::RemoveOld { new_contents() } else { old.clone() };
        assert_eq!(there, expected, "before {step:?}");
    }
}

#[test]
fn a_failure_at_any_step_leaves_the_old_report_or_the_new_one_and_nothing_beside_it() {
    let mut reached = 0;
    for failing in 0.. {
        let (_root, place) = with_old_report();
        let old = contents(&place);
        let mut steps = 0;
        let outcome = folder_watched(&place, &new_files(), &mut |_| {
            steps += 1;
            if steps > failing { Err(io::ErrorKind::StorageFull.into()) } else { Ok(()) }
        });
        let beside = fs::read_dir(place.parent().unwrap()).unwrap().count();
        if let Err(failure) = outcome {
            assert_eq!(contents(&place), old);
            assert_eq!(failure.cause.kind(), io::ErrorKind::StorageFull);
            assert!(failure.doing.contains("out"), "{failure}");
            assert_eq!(beside, 1, "{failure}");
        } else {
            assert_eq!(contents(&place), new_contents());
            // The old folder may be left under a hidden name; the next issue sweeps it.
            folder(&place, &new_files()).unwrap();
            assert_eq!(fs::read_dir(place.parent().unwrap()).unwrap().count(), 1);
        }
        reached = steps;
        if steps <= failing {
            break;
        }
    }
    assert!(reached > 8);
}

#[test]
fn what_a_stop_has_left_is_swept_by_the_next_issue() {
    let (_root, place) = with_old_report();
    let left = place.with_file_name(".surge.halfstep-AbCdEf");
    fs::create_dir(&left).unwrap();
    fs::write(left.join("report.html"), "half").unwrap();
    let nested = place.join(".variant.halfstep-AbCdEf");
    fs::create_dir(&nested).unwrap();
    fs::write(nested.join("report.html"), "half").unwrap();
    folder(&place, &new_files()).unwrap();
    assert!(!left.exists());
    assert_eq!(contents(&place), new_contents());
}

#[test]
fn a_file_where_the_folder_belongs_is_a_failure_that_names_it() {
    let root = tempfile::tempdir().unwrap();
    let place = root.path().join("surge");
    fs::write(&place, "mine").unwrap();
    let failure = folder(&place, &new_files()).unwrap_err();
    assert!(
        failure.to_string().ends_with("surge: a file stands where the report folder belongs"),
        "{failure}"
    );
    let failure = folder(&place.join("deeper"), &new_files()).unwrap_err();
    assert!(failure.doing.starts_with("cannot make the folder"), "{failure}");
    assert_eq!(fs::read_to_string(&place).unwrap(), "mine");
}

#[test]
fn a_folder_where_a_file_belongs_is_a_failure_that_leaves_it() {
    let root = tempfile::tempdir().unwrap();
    let place = root.path().join("surge");
    fs::create_dir_all(place.join("report.html")).unwrap();
    fs::write(place.join("report.html/mine.txt"), "mine").unwrap();
    assert!(folder(&place, &new_files()).is_err());
    assert_eq!(contents(&place), [("report.html/mine.txt".to_owned(), "mine".to_owned())].into());
}

#[test]
fn a_path_that_leads_out_of_the_folder_is_refused() {
    let root = tempfile::tempdir().unwrap();
    let place = root.path().join("surge");
    for path in ["../x", "/x", "", "data/../../x", "."] {
        assert!(folder(&place, &[new_file_of(path, "x")]).is_err(), "{path}");
    }
    assert_eq!(fs::read_dir(root.path()).unwrap().count(), 0);
}

#[cfg(unix)]
#[test]
fn a_read_only_report_is_kept() {
    use std::os::unix::fs::PermissionsExt;
    let (_root, place) = with_old_report();
    let old = contents(&place);
    fs::set_permissions(&place, fs::Permissions::from_mode(0o555)).unwrap();
    let failure = folder(&place, &new_files()).unwrap_err();
    assert_eq!(failure.cause.kind(), io::ErrorKind::PermissionDenied);
    assert_eq!(contents(&place), old);
    fs::set_permissions(&place, fs::Permissions::from_mode(0o755)).unwrap();
}

#[cfg(unix)]
#[test]
fn a_link_in_place_of_the_folder_stays_a_link() {
    let (root, place) = with_old_report();
    let link = root.path().join("link");
    std::os::unix::fs::symlink(&place, &link).unwrap();
    folder(&link, &new_files()).unwrap();
    assert!(fs::symlink_metadata(&link).unwrap().is_symlink());
    assert_eq!(contents(&place), new_contents());
}

#[cfg(unix)]
#[test]
fn others_may_read_a_report_as_the_users_mask_allows() {
    use std::os::unix::fs::PermissionsExt;
    let root = tempfile::tempdir().unwrap();
    let mode = |path: &Path| fs::metadata(path).unwrap().permissions().mode() & 0o777;
    let (like_folder, like_file) = (root.path().join("d"), root.path().join("f"));
    fs::create_dir(&like_folder).unwrap();
    fs::write(&like_file, "").unwrap();
    let place = root.path().join("surge");
    folder(&place, &new_files()).unwrap();
    file(&root.path().join("index.html"), b"x").unwrap();
    assert_eq!(mode(&place), mode(&like_folder));
    assert_eq!(mode(&place.join("report.html")), mode(&like_file));
    assert_eq!(mode(&root.path().join("index.html")), mode(&like_file));
}

#[test]
fn a_single_file_is_replaced_or_refused() {
    let root = tempfile::tempdir().unwrap();
    let place = root.path().join("index.html");
    new_file(&place, b"one").unwrap();
    let failure = new_file(&place, b"two").unwrap_err();
    assert_eq!(failure.cause.kind(), io::ErrorKind::AlreadyExists);
    assert_eq!(fs::read(&place).unwrap(), b"one");
    file(&place, b"three").unwrap();
    assert_eq!(fs::read(&place).unwrap(), b"three");
    assert!(file(&root.path().join("no/such/folder.html"), b"x").is_err());
    assert_eq!(fs::read_dir(root.path()).unwrap().count(), 1);
}
