//! The page of a study over spreads: claims by cases with their shares, readings by cases with
//! their quantiles and extremes, the verdicts last.

use super::claims::stated;
use super::fire::{defaults, opening};
use super::hazards::{hazards, worst};
use super::{Align, Cell, Grid, counted, set_in_words, tone};
use crate::look::{Look, Tone, heading, paragraph};
use crate::number::{Scale, quantity};
use crate::record::Origin;
use pulsewright_study::Verdict;
use pulsewright_study::spread::{ClaimShare, Extreme, ReadingSpread, Spread, SpreadCase};

/// Most significant digits of what was drawn.
const DIGITS: i32 = 5;
/// The quantiles that a page has room for.
const SHOWN: [(f64, &str); 3] = [(0.01, "1 %"), (0.5, "median"), (0.99, "99 %")];
/// The least share of a variance that is worth a word.
const MATTERS: f64 = 0.01;

/// What `spread` prints: hazards, claims and readings by cases, and the verdicts last.
#[must_use]
pub fn spread(spread: &Spread, origin: &Origin<'_>, look: Look) -> String {
    let mut out = String::new();
    opening(&mut out, look, origin, &run(spread));
    if !origin.set.is_empty() {
        let with = format!("with {}", set_in_words(&origin.set));
        paragraph(&mut out, look, 0, &with, Tone::Plain);
    }
    let vary = match spread.tally.varying.as_slice() {
        [] => "nothing varies: no value has a spread".to_owned(),
        names => format!("what varies: {}", names.join(", ")),
    };
    paragraph(&mut out, look, 0, &vary, Tone::Plain);
    let all = spread.cases.iter().map(|c| c.hazards.as_slice());
    hazards(&mut out, look, &worst(all));
    let first = spread.cases.first();
    for k in 0..first.map_or(0, |c| c.claims.len()) {
        claim(&mut out, look, k, &spread.cases);
    }
    for k in 0..first.map_or(0, |c| c.readings.len()) {
        reading(&mut out, look, k, &spread.cases);
    }
    again(&mut out, look, spread);
    defaults(&mut out, look, &spread.tally.defaults);
    verdicts(&mut out, look, spread);
    out
}

/// `7 cases of 10000 shots with seed 1, 50 ms each by trapezoidal rule`
fn run(spread: &Spread) -> String {
    let tally = &spread.tally;
    let slice = match tally.slice {
        [_, 0 | 1] => String::new(),
        [at, of] => format!(", slice {at} of {of}"),
    };
    format!(
        "{} of {} with seed {}{slice}, {} each by {}",
        counted(spread.cases.len(), "case"),
        shots(tally.shots),
        tally.seed,
        quantity(tally.span, "s"),
        tally.method
    )
}

fn shots(n: u64) -> String {
    counted(usize::try_from(n).unwrap_or(usize::MAX), "shot")
}

/// `97.31 %`: two decimals, and more where these would say none or all of what is not.
fn percent(share: f64) -> String {
    let is_rounded_away =
        |digits: &str| matches!(digits, "0" | "100") && share != 0.0 && share != 1.0;
    let with = |decimals: usize| {
        let digits = format!("{:.decimals$}", 100.0 * share);
        digits
            .trim_end_matches('0')
            .trim_end_matches('.')
            .to_owned()
    };
    let found = (2..=10).map(with).find(|digits| !is_rounded_away(digits));
    format!("{} %", found.unwrap_or_else(|| with(2)))
}

fn claim(out: &mut String, look: Look, k: usize, cases: &[SpreadCase]) {
    let all = || cases.iter().filter_map(|c| Some((c, c.claims.get(k)?)));
    let Some((_, first)) = all().next() else {
        return;
    };
    out.push('\n');
    paragraph(out, look, 0, &asked(first), Tone::Heading);
    let mut grid = Grid::new([
        Align::Right,
        Align::Right,
        Align::Right,
        Align::Point,
        Align::Left,
        Align::Left,
        Align::Text,
    ])
    .headed([
        "case",
        "holds",
        "of",
        "share",
        "95 % interval",
        "verdict",
        "with",
    ]);
    for (n, (case, claim)) in all().enumerate() {
        let counts = &claim.counts;
        let interval = claim.low.zip(claim.high);
        let mut with = set_in_words(&case.set);
        if counts.undecided > 0 {
            let blank = if with.is_empty() { "" } else { "; " };
            with.push_str(&format!("{blank}{} undecided", counts.undecided));
        }
        grid.row([
            (n + 1).to_string().into(),
            counts.holds.to_string().into(),
            counts.of().to_string().into(),
            claim.share.map_or_else(String::new, percent).into(),
            interval
                .map_or_else(String::new, |(a, b)| {
                    format!("{} to {}", percent(a), percent(b))
                })
                .into(),
            Cell::toned(claim.verdict.words(), tone(claim.verdict)),
            with.into(),
        ]);
    }
    grid.write(out, look);
}

/// `dose: energy into chest is at least 5 J, in at least 99 % of shots; answers REQ-1`
fn asked(claim: &ClaimShare) -> String {
    let counts = &claim.counts;
    let share = counts.asked.map_or_else(
        || "in every shot".to_owned(),
        |s| format!("in at least {} of shots", percent(s)),
    );
    let relation = format!("{}, {share}", counts.relation);
    stated(&counts.name, &counts.text, &relation, &counts.answers)
}

fn reading(out: &mut String, look: Look, k: usize, cases: &[SpreadCase]) {
    let all: Vec<&ReadingSpread> = cases.iter().filter_map(|c| c.readings.get(k)).collect();
    let Some(first) = all.first() else { return };
    out.push('\n');
    let title = format!("{}: {}", first.name, first.text);
    paragraph(out, look, 0, &title, Tone::Heading);
    let values = all.iter().flat_map(|r| [r.least, r.most]).flatten();
    let scale = Scale::of(&first.unit, values.map(|e| e.value));
    let own = Scale::of(&first.unit, all.iter().filter_map(|r| r.deviation));
    let show = |x: Option<f64>| x.map_or_else(String::new, |x| scale.brief(x, None, DIGITS));
    let head = ["case", "mean", "deviation"].into_iter();
    let mut columns = vec![Align::Right, Align::Point, Align::Point];
    columns.extend(SHOWN.map(|_| Align::Point));
    let mut grid = Grid::new(columns).headed(head.chain(SHOWN.map(|(_, word)| word)));
    for (n, reading) in all.iter().enumerate() {
        let deviation = reading
            .deviation
            .map_or_else(String::new, |x| own.brief(x, None, 3));
        let quantile = |q: f64| reading.quantiles.iter().find(|(at, _)| *at == q);
        let mut row: Vec<Cell> = vec![
            (n + 1).to_string().into(),
            show(reading.mean).into(),
            deviation.into(),
        ];
        row.extend(SHOWN.map(|(q, _)| Cell::from(show(quantile(q).map(|(_, x)| *x)))));
        grid.row(row);
    }
    grid.write(out, look);
    let mut grid = Grid::new([
        Align::Right,
        Align::Point,
        Align::Right,
        Align::Point,
        Align::Right,
        Align::Text,
    ])
    .headed(["case", "least", "draw", "most", "draw", "what matters"]);
    let draw = |e: Option<Extreme>| e.map_or_else(String::new, |e| e.draw.to_string());
    for (n, reading) in all.iter().enumerate() {
        grid.row([
            (n + 1).to_string().into(),
            show(reading.least.map(|e| e.value)).into(),
            draw(reading.least).into(),
            show(reading.most.map(|e| e.value)).into(),
            draw(reading.most).into(),
            matters(reading).into(),
        ]);
    }
    grid.write(out, look);
}

/// `bank 61 %, choke 5 %`, by weight; and in how many shots there was no value.
fn matters(reading: &ReadingSpread) -> String {
    let mut all: Vec<&(String, f64)> = reading.matters.iter().collect();
    all.retain(|(_, share)| *share >= MATTERS);
    all.sort_by(|a, b| b.1.total_cmp(&a.1));
    let mut words: Vec<String> = all
        .iter()
        .map(|(name, share)| format!("{name} {:.0} %", 100.0 * share))
        .collect();
    if reading.missing > 0 {
        words.push(format!("no value in {}", shots(reading.missing)));
    }
    words.join(", ")
}

/// How a draw is fired again.
fn again(out: &mut String, look: Look, spread: &Spread) {
    let readings = spread.cases.iter().flat_map(|c| &c.readings);
    if readings.clone().all(|r| r.least.is_none()) {
        return;
    }
    out.push('\n');
    let text = format!(
        "a draw is fired again with `fire`, `--case`, and `--draw` with `--seed {}`; what matters is the squared \
         correlation with the reading",
        spread.tally.seed
    );
    paragraph(out, look, 0, &text, Tone::Faint);
}

fn verdicts(out: &mut String, look: Look, spread: &Spread) {
    if spread.claims.is_empty() {
        return;
    }
    heading(out, look, "verdicts", Tone::Heading);
    let mut grid = Grid::new([Align::Left, Align::Left, Align::Text]);
    for (k, (name, verdict)) in spread.claims.iter().enumerate() {
        let of = spread.cases.iter().enumerate();
        let shares = of.filter_map(|(n, c)| Some((n, c.claims.get(k)?.share?)));
        let text = shares.min_by(|a, b| a.1.total_cmp(&b.1)).map_or_else(
            || "applies in no shot".to_owned(),
            |(n, share)| format!("{} at least, in case {}", percent(share), n + 1),
        );
        let verdict = Cell::toned(verdict.words(), tone(*verdict));
        grid.row([name.as_str().into(), verdict, text.into()]);
    }
    grid.write(out, look);
    out.push('\n');
    let (line, tone) = super::judge::total(
        &spread
            .claims
            .iter()
            .map(|(_, v)| *v)
            .collect::<Vec<Verdict>>(),
        &format!(
            "{} of {}",
            counted(spread.cases.len(), "case"),
            shots(spread.tally.shots)
        ),
    );
    paragraph(out, look, 0, &line, tone);
}

#[cfg(test)]
mod tests {
    use super::percent;

    #[test]
    fn nearly_all_is_not_all() {
        assert_eq!(percent(0.97314), "97.31 %");
        assert_eq!(percent(0.999_996), "99.9996 %");
        assert_eq!(
            [percent(0.0), percent(1.0), percent(1e-6)],
            ["0 %", "100 %", "0.0001 %"]
        );
    }
}
