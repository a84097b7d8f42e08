//! scratch
use halfstep::cli::pipeline::evaluate;
#[test]
fn scratch() {
    let mut files: Vec<_> = std::fs::read_dir("/work/wt/studies/tests/published")
        .unwrap()
        .map(|e| e.unwrap().path())
        .filter(|p| p.extension().is_some_and(|e| e == "md"))
        .collect();
    files.sort();
    for f in files {
        let text = std::fs::read_to_string(&f).unwrap();
        let name = f.file_stem().unwrap().to_str().unwrap().to_owned();
        let n2 = name.clone();
        match std::panic::catch_unwind(move || evaluate(&n2, &text)) {
            Ok(Ok((_, o))) => {
                for r in &o.runs {
                    for q in &r.quantities {
                        println!(
                            "{name:22} {:18} {:16} {:?} bound {:?} {} | {} | {:?}",
                            q.text,
                            r.scheme.key,
                            q.value,
                            q.bound,
                            q.grade.word(),
                            q.why,
                            q.estimates.observed_order
                        );
                    }
                }
            }
            Ok(Err(e)) => println!("{name} ERR {e}"),
            Err(_) => println!("{name} PANIC"),
        }
    }
}
