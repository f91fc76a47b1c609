//! Where the joules went: one column, one prefix.

use super::{Align, Cell, Grid, bound_cell};
use crate::look::{Look, Tone, heading};
use crate::number::Scale;
use pulsewright_study::outcome::BalanceResult;

/// Adds the energy balance.
pub(super) fn balance(out: &mut String, look: Look, balance: &BalanceResult) {
    heading(out, look, "energy balance", Tone::Heading);
    let scale = Scale::of("J", entries(balance).map(|(_, joules)| joules));
    let bound = least(balance);
    let mut grid = Grid::new([Align::Left, Align::Point, Align::Left]);
    for (word, joules) in entries(balance) {
        grid.row([
            word.into(),
            scale.show(joules, Some(bound)).into(),
            Cell::default(),
        ]);
    }
    let own = Scale::of("J", [balance.residual, balance.bound]);
    let residual = own.show(balance.residual, Some(balance.bound));
    grid.row([
        "residual".into(),
        residual.into(),
        bound_cell(balance.bound, "J"),
    ]);
    grid.write(out, look);
}

/// The bound that the digits follow: the balance's, and no less than the rounding of the largest.
pub(crate) fn least(balance: &BalanceResult) -> f64 {
    let largest = entries(balance).fold(0.0, |a: f64, (_, joules)| a.max(joules.abs()));
    balance.bound.max(largest * 1e-8).max(f64::MIN_POSITIVE)
}

pub(crate) fn entries(balance: &BalanceResult) -> impl Iterator<Item = (String, f64)> + '_ {
    let start = [("stored at the start".to_owned(), balance.stored_start)];
    let supplied = balance
        .supplied
        .iter()
        .map(|(name, j)| (format!("supplied by {name}"), *j));
    let heat = balance
        .dissipated
        .iter()
        .map(|(name, j)| (format!("heat in {name}"), *j));
    let end = [
        ("lost at events".to_owned(), balance.lost_at_events),
        ("stored at the end".to_owned(), balance.stored_end),
    ];
    start.into_iter().chain(supplied).chain(heat).chain(end)
}
