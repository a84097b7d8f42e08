//! Tests of charts: what is drawn, and that nothing is drawn where it does not belong.

use super::*;
use crate::arithmetic::elementary::{cos, exp, sin};

fn chart(points: Vec<(f64, f64)>) -> Chart {
    Chart {
        id: "c".to_owned(),
        title: "A & B <c>".to_owned(),
        description: "d".to_owned(),
        x_title: "t / s".to_owned(),
        y_title: "z / m".to_owned(),
        series: vec![Series { label: "<z>".to_owned(), points, marks: false }],
        limits: vec![(0.5, "limit 0.5 m".to_owned())],
        over_time: true,
    }
}

/// The drawn points of elements with a colour.
fn points_of(svg: &str, colour: &str) -> Vec<(f64, f64)> {
    let lines = svg.lines().filter(|line| line.contains(colour) && line.contains(" points=\""));
    lines
        .flat_map(|line| {
            let text = line.split(" points=\"").nth(1).unwrap().split('"').next().unwrap();
            text.split_whitespace().map(|pair| {
                let (x, y) = pair.split_once(',').unwrap();
                (x.parse::<f64>().unwrap(), y.parse::<f64>().unwrap())
            })
        })
        .collect()
}

/// The plot area: the corners of the two axis lines.
fn plot_area(svg: &str) -> ((f64, f64), (f64, f64)) {
    let axes = svg.lines().find(|line| line.contains("#222222") && line.matches(',').count() >= 4).unwrap();
    let points = points_of(axes, "#222222");
    assert_eq!(points.len(), 3);
    ((points[0].0, points[0].1), (points[2].0, points[2].1))
}

/// Every tag is closed in order, attributes are quoted, and no bare `&` or `<` is left. Ids are unique.
fn check_well_formed(svg: &str) {
    let mut open: Vec<&str> = Vec::new();
    let mut rest = svg;
    while let Some(start) = rest.find('<') {
        check_text(&rest[..start]);
        let end = start + rest[start..].find('>').expect("a tag ends");
        let tag = &rest[start + 1..end];
        if let Some(name) = tag.strip_prefix('/') {
            assert_eq!(open.pop(), Some(name));
        } else {
            let name = tag.split([' ', '/']).next().unwrap();
            assert_eq!(tag.matches('"').count() % 2, 0, "{tag}");
            let mut names: Vec<&str> =
                tag.split('"').step_by(2).filter_map(|part| part.strip_suffix('=')).map(str::trim).collect();
            let count = names.len();
            names.sort_unstable();
            names.dedup();
            assert_eq!(names.len(), count, "an attribute stands twice: {tag}");
            tag.split('"').for_each(check_text);
            if !tag.ends_with('/') {
                open.push(name);
            }
        }
        rest = &rest[end + 1..];
    }
    assert!(rest.trim().is_empty() && open.is_empty(), "{open:?} {rest}");
    let mut ids: Vec<&str> =
        svg.split(" id=\"").skip(1).map(|part| part.split('"').next().unwrap()).collect();
    ids.sort_unstable();
    assert!(ids.windows(2).all(|pair| pair[0] != pair[1]));
}

fn check_text(text: &str) {
    for part in text.split('&').skip(1) {
        let entity = part.split(';').next().unwrap();
        assert!(["amp", "lt", "gt", "quot", "apos"].contains(&entity), "&{part}");
    }
    assert!(text.chars().all(|c| !c.is_control() || c == '\n'));
}

#[test]
fn hostile_points_draw_nothing_outside() {
    let huge = f64::MAX;
    let lists = [
        vec![(0.0, 0.0), (1.0, f64::NAN), (2.0, f64::INFINITY), (3.0, 1.0), (4.0, 0.2)],
        vec![(0.0, huge), (1.0, -huge), (2.0, 1.0), (3.0, 0.0)],
        vec![(0.0, 5e-324), (1.0, 0.0), (2.0, -5e-324)],
        vec![(1.0, 1.0); 3],
        vec![(0.0, 1e300), (1.0, -1e300), (2.0, 0.0)],
        vec![(f64::NAN, f64::NAN); 4],
        vec![(f64::NEG_INFINITY, 0.0), (huge, 0.0)],
        vec![(3.0, 0.0), (1.0, 1.0), (2.0, -1.0)],
        vec![(1e9, 1.0), (1e9 + 1e-6, 1.0 + 1e-15)],
    ];
    for points in lists {
        for over_time in [true, false] {
            for marks in [true, false] {
                let mut chart = chart(points.clone());
                chart.over_time = over_time;
                chart.series[0].marks = marks;
                let svg = draw(&chart);
                check_well_formed(&svg);
                assert!(!svg.contains("NaN") && !svg.contains("inf"), "{svg}");
                let (low, high) = plot_area(&svg);
                let room = if marks { 40.0 } else { 21.0 };
                for (x, y) in points_of(&svg, "#0072B2") {
                    let inside =
                        x >= low.0 - room && x <= high.0 + room && y >= low.1 - room && y <= high.1 + room;
                    assert!(inside, "{points:?}: {x} {y} in {low:?} {high:?}");
                }
            }
        }
    }
}

#[test]
fn what_lies_beyond_a_given_range_is_cut_and_not_drawn_at_the_edge() {
    let points: Vec<(f64, f64)> = (0..=400).map(|i| f64::from(i) * 0.05).map(|t| (t, 3.0 * sin(t))).collect();
    let band = points.iter().map(|(t, z)| (*t, z - 0.4, z + 0.4)).collect();
    let extras = Extras {
        bands: vec![Band { series: 0, points: band }],
        x_range: Some((2.0, 9.0)),
        y_range: Some((-1.0, 1.0)),
    };
    let svg = draw_with(&chart(points), &extras);
    check_well_formed(&svg);
    let (low, high) = plot_area(&svg);
    let drawn = points_of(&svg, "#0072B2");
    assert!(drawn.iter().all(|(x, y)| *x >= low.0 && *x <= high.0 && *y >= low.1 && *y <= high.1));
    // No stretch of a line runs along the edge: the sine leaves the range at once.
    for line in svg.lines().filter(|line| line.contains("<polyline") && line.contains("#0072B2")) {
        let along = points_of(line, "#0072B2")
            .windows(2)
            .filter(|p| p[0].1 == p[1].1 && (p[0].1 == low.1 || p[0].1 == high.1))
            .count();
        assert_eq!(along, 0, "{line}");
    }
    assert_eq!(svg.matches("opacity=\"0.18\"").count(), 1);
}

#[test]
fn a_gap_splits_a_line_and_a_lone_point_is_seen() {
    let nan = f64::NAN;
    let svg = draw(&chart(vec![
        (0.0, 0.0),
        (1.0, 1.0),
        (2.0, nan),
        (3.0, 0.7),
        (4.0, nan),
        (5.0, 0.0),
        (6.0, 1.0),
    ]));
    assert_eq!(svg.lines().filter(|line| line.contains("<polyline") && line.contains("#0072B2")).count(), 2);
    assert_eq!(svg.lines().filter(|line| line.contains("<polygon") && line.contains("#0072B2")).count(), 1);
}

#[test]
fn a_chart_has_title_and_description_for_readers_who_do_not_see_it() {
    let svg = draw(&chart(vec![(0.0, 0.0), (1.0, 1.0)]));
    assert!(svg.starts_with("<svg "));
    assert!(svg.contains("role=\"img\"") && svg.contains("aria-labelledby=\"c-title c-desc\""));
    assert!(svg.contains("<title id=\"c-title\">A &amp; B &lt;c&gt;</title>"));
    assert!(svg.contains("<desc id=\"c-desc\">d</desc>"));
    assert!(svg.contains("viewBox=\"0 0 7600 4000\" width=\"760\" height=\"400\""));
    assert!(!svg.contains("<z>"));
}

#[test]
fn the_same_chart_gives_the_same_bytes() {
    let points: Vec<(f64, f64)> = (0..500).map(|i| (f64::from(i), f64::from(i * i % 97))).collect();
    assert_eq!(draw(&chart(points.clone())), draw(&chart(points)));
}

#[test]
fn an_empty_chart_is_drawn() {
    let mut empty = chart(Vec::new());
    check_well_formed(&draw(&empty));
    empty.series.clear();
    check_well_formed(&draw(&empty));
}

#[test]
fn many_points_make_a_small_picture_with_the_highest_point_in_it() {
    let mut points: Vec<(f64, f64)> = (0..100_000).map(f64::from).map(|i| (i, sin(i * 0.9))).collect();
    let few = draw(&chart(points[..3].to_vec()));
    points[77_777].1 = 5.0;
    let svg = draw(&chart(points.clone()));
    assert!(svg.len() < 90_000, "{}", svg.len());
    let highest = points_of(&svg, "#0072B2").iter().map(|p| p.1).fold(f64::INFINITY, smaller);
    let axis = Axis::linear(-1.0, 5.0, 7, false);
    let expected = 10.0 * (HEIGHT - BELOW - axis.share(5.0) * (HEIGHT - BELOW - TOP));
    assert!((highest - expected).abs() <= 1.0, "{highest} {expected}");
    assert!(few.len() < 20_000);
    let mut path = chart((0..100_000).map(|i| f64::from(i) * 1e-3).map(|t| (sin(t), cos(1.3 * t))).collect());
    path.over_time = false;
    assert!(draw(&path).len() < 120_000);
}

#[test]
fn a_limit_is_drawn_where_it_is_near_and_named_where_it_is_far() {
    let mut far = chart(vec![(0.0, 0.0), (1.0, 1.0)]);
    far.limits.push((1e6, "burst 1e6 m".to_owned()));
    let svg = draw(&far);
    assert!(svg.contains("limit 0.5 m\n") && svg.contains("burst 1e6 m lies above this frame"));
    let level = draw(&chart(vec![(0.0, 0.4), (1.0, 0.4)]));
    assert!(level.contains("limit 0.5 m\n") && !level.contains("lies"));
}

#[test]
fn a_legend_takes_the_place_of_labels_that_do_not_fit() {
    let mut many = chart(Vec::new());
    many.series = (0..30)
        .map(|i| Series {
            label: format!("line {i}"),
            points: (0..50).map(f64::from).map(|t| (t, exp(-0.02 * t * f64::from(i)))).collect(),
            marks: i % 9 == 0,
        })
        .collect();
    let svg = draw(&many);
    check_well_formed(&svg);
    assert!(svg.contains("width=\"760\"") && !svg.contains("height=\"400\""));
    assert!((0..30).all(|i| svg.contains(&format!("line {i}\n"))));
}
