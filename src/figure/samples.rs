//! Draws a page of sample charts to look at: `cargo test figure::samples` writes it to the folder for temporary files.

use super::chart::{Band, Chart, Extras, Series, draw, draw_with};
use super::convergence::{self, Errors};
use super::stability;
use crate::arithmetic::elementary::{cos, exp, power, sin};

fn line(label: &str, points: Vec<(f64, f64)>) -> Series {
    Series { label: label.to_owned(), points, marks: false }
}

fn chart(id: &str, titles: (&str, &str), series: Vec<Series>) -> Chart {
    Chart {
        id: id.to_owned(),
        title: id.to_owned(),
        description: "A sample with invented numbers".to_owned(),
        x_title: titles.0.to_owned(),
        y_title: titles.1.to_owned(),
        series,
        limits: Vec::new(),
        over_time: true,
    }
}

fn over(end: f64, count: u32, f: impl Fn(f64) -> f64) -> Vec<(f64, f64)> {
    (0..=count).map(|k| end * f64::from(k) / f64::from(count)).map(|t| (t, f(t))).collect()
}

fn pages() -> Vec<String> {
    let surge = |t: f64| 10.6 * exp(-0.004 * t) * sin(0.0524 * t) - 1.5 * exp(-0.02 * t);
    let mut level = chart("level", ("Time t / s", "Level z / m"), vec![line("z", over(600.0, 6000, surge))]);
    level.limits = vec![(12.5, "freeboard ≤ 12.5 m".to_owned()), (-8.0, "intake ≥ −8.0 m".to_owned())];

    let mut tanks: Vec<Series> = (1..=7)
        .map(|k| {
            let rate = 0.15 * f64::from(k);
            line(&format!("tank {k}"), over(24.0, 300, |t| 4e5 * (1.0 - exp(-rate * t)) + 2e3 * f64::from(k)))
        })
        .collect();
    tanks.push(Series {
        label: "tank 1 (rows)".to_owned(),
        points: over(24.0, 12, |t| 4e5 * (1.0 - exp(-0.15 * t)) + 2e3),
        marks: true,
    });
    let pressure = chart("pressure", ("Time t / h", "Pressure p / Pa"), tanks);

    let mut portrait = chart(
        "portrait",
        ("Angle φ / rad", "Angular velocity ω / (rad/s)"),
        vec![
            line(
                "light damping",
                over(200.0, 40_000, |t| t)
                    .iter()
                    .map(|(t, _)| (exp(-0.012 * t) * cos(1.3 * t), -1.3 * exp(-0.012 * t) * sin(1.3 * t)))
                    .collect(),
            ),
            line(
                "heavy damping",
                over(40.0, 4000, |t| t)
                    .iter()
                    .map(|(t, _)| (-0.8 * exp(-0.2 * t) * cos(1.1 * t), exp(-0.2 * t) * sin(1.1 * t)))
                    .collect(),
            ),
        ],
    );
    portrait.over_time = false;

    let mean = |t: f64| 1.2e-7 * exp(-0.3 * t) * (1.0 + 0.4 * sin(4.0 * t));
    let band = over(12.0, 400, mean)
        .into_iter()
        .map(|(t, c)| (t, c - 6e-9 * (1.0 + t), c + 6e-9 * (1.0 + t)))
        .collect();
    let mut broken = over(12.0, 400, mean);
    for point in &mut broken[200..230] {
        point.1 = f64::NAN;
    }
    let level_band = draw_with(
        &chart("band", ("Time t / h", "Concentration c / (mol/m³)"), vec![line("c", broken)]),
        &Extras { bands: vec![Band { series: 0, points: band }], ..Extras::default() },
    );

    let names = [
        "after the first shot, with the valve half open",
        "after the second shot, with the valve shut",
        "a third line whose label is far too long to stand anywhere beside a chart",
    ];
    let long = names
        .iter()
        .zip([1.0, 1.4, 0.7])
        .map(|(name, rate)| line(name, over(10.0, 300, |t| cos(rate * t))))
        .collect();
    let mut long = chart(
        "long",
        ("Time t / s", "A quantity with a very long explanation of what it might be x / m"),
        long,
    );
    long.limits = vec![(1e5, "burst 1e5 m".to_owned())];

    let errors = |label: &str, order, factor: f64, floor: f64| Errors {
        label: label.to_owned(),
        points: (0..3)
            .map(|k| 0.5 / f64::from(1 << k))
            .map(|h| (h, factor * power(h, order) + floor))
            .collect(),
        order,
    };
    let convergence = convergence::draw(
        "convergence",
        "convergence",
        "d",
        "Largest step h / s",
        &[errors("z_max", 4, 3e-4, 0.0), errors("t_max", 4, 1e-4, 0.0), errors("z_end", 4, 9e-4, 2e-7)],
    )
    .unwrap();

    // The outline of |1 + z + z²/2 + z³/6 + z⁴/24| = 1, found along rays from a point inside.
    let size = |re: f64, im: f64| {
        let (mut term, mut sum) = ((1.0, 0.0), (1.0, 0.0));
        for k in 1..=4 {
            let k = f64::from(k);
            term = ((term.0 * re - term.1 * im) / k, (term.0 * im + term.1 * re) / k);
            sum = (sum.0 + term.0, sum.1 + term.1);
        }
        sum.0 * sum.0 + sum.1 * sum.1
    };
    let outline: Vec<(f64, f64)> = (0..240)
        .map(|k| f64::from(k) * std::f64::consts::PI / 120.0)
        .map(|angle| {
            let mut r = 0.0;
            while size(-1.0 + r * cos(angle), r * sin(angle)) <= 1.0 {
                r += 0.005;
            }
            (-1.0 + r * cos(angle), r * sin(angle))
        })
        .collect();
    let near: Vec<(f64, f64)> = (0..40)
        .map(f64::from)
        .map(|k| (-0.05 * k, 0.04 * k))
        .flat_map(|(re, im)| [(re, im), (re, -im)])
        .collect();
    let far: Vec<(f64, f64)> = vec![(-6.0, 0.0), (-0.3, 0.2), (-4000.0, 0.0)];
    let near = stability::draw("near", "near", "d", std::slice::from_ref(&outline), &near).0;
    let far = stability::draw("far", "far", "d", &[outline], &far).0;
    vec![draw(&level), draw(&pressure), draw(&portrait), level_band, draw(&long), convergence, near, far]
}

#[test]
fn samples_are_drawn_for_a_look() {
    let pages = pages();
    assert!(pages.iter().all(|svg| svg.len() > 3000 && svg.len() < 120_000));
    let figures: String = pages.iter().map(|svg| format!("<figure>{svg}</figure>\n")).collect();
    let page = format!(
        "<!doctype html><html lang=\"en\"><meta charset=\"utf-8\"><title>Samples</title>\n<style>body{{margin:0;background:#fff}}figure{{margin:10px;width:760px;float:left}}</style>\n{figures}</html>\n"
    );
    let path = std::env::temp_dir().join("halfstep-sample-charts.html");
    std::fs::File::create(&path)
        .and_then(|mut file| std::io::Write::write_all(&mut file, page.as_bytes()))
        .unwrap();
}
