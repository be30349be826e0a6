//! Tables: how wide each column is, and the strips of head and rows.

use std::rc::Rc;

use super::look::{ACCENT, BAND, BODY_WIDTH, INK, RULE, SMALL, SOFT_INK, TABLE, TABLE_HEAD, tone_colour};
use super::strip::{Breaking, Cell, Mark, Strip, keep_together, row};
use super::text::{natural_width, one_line, unbroken_width, wrap};
use crate::report::document::{Column, Row, Style, Table, Text, Tone};

/// Air on the left and right of a cell's text.
const SIDE: f32 = 5.0;
const ABOVE_ROW: f32 = 2.5;
const BELOW_ROW: f32 = 3.0;
/// Bar at the left of a row with a tone.
const BAR: f32 = 2.5;
const HAIRLINE: f32 = 0.5;
/// A column is never planned narrower than this, nor kept unbroken wider than a third of the page for its longest word.
const NARROWEST: f32 = 16.0;
const WIDEST_UNBROKEN: f32 = BODY_WIDTH / 3.0;
/// A table of fitted columns that fills less than this share of the width is left narrow.
const STRETCH_FROM: f32 = 0.7;
/// A column is not widened beyond this to keep its head on one line.
const WIDEST_HEAD: f32 = 64.0;
const LINES_IN_HEAD: usize = 6;

/// The strips of a table: caption, head, one or more for each row.
pub fn table_strips(table: &Table) -> Vec<Strip> {
    let table = &with_words_for_tones(table);
    let widths = column_widths(table, BODY_WIDTH);
    let total = widths.iter().sum();
    let head = Rc::new(head_strip(table, &widths, total));
    let mut strips = caption_strips(table);
    strips.push(Strip { keep_with_next: !table.rows.is_empty(), ..(*head).clone() });
    let last = table.rows.len().saturating_sub(1);
    for (place, table_row) in table.rows.iter().enumerate() {
        let mut of_row = row_strips(table_row, table, &widths, total);
        for strip in &mut of_row {
            strip.head = Some(Rc::clone(&head));
        }
        // The last row does not go over to a new page alone.
        if let Some(end) = of_row.last_mut() {
            end.keep_with_next = place + 1 == last;
        }
        strips.extend(of_row);
    }
    if let Some(first) = strips.first_mut() {
        first.space_before = 8.0;
    }
    if let Some(end) = strips.pop() {
        strips.push(end.with_rule_below(0.0, total, 0.8, ACCENT).padded(0.0, 8.0));
    }
    strips
}

/// Width of each column with its side air, pt; together at most `available`.
///
/// Columns of weight 0 are as wide as their widest cell, and the others share what is left. When there is too little,
/// the fitted columns give way down to their longest word, and then all columns alike.
pub fn column_widths(table: &Table, available: f32) -> Vec<f32> {
    let natural = widths_by(table, natural_width);
    let least: Vec<f32> = widths_by(table, unbroken_width)
        .iter()
        .zip(&natural)
        .map(|(unbroken, natural)| unbroken.min(WIDEST_UNBROKEN).min(*natural))
        .collect();
    let shares: Vec<f32> = table.columns.iter().map(|column| column.weight.max(0.0)).collect();
    let wanted = |place: usize| {
        if shares[place] > 0.0 { least[place] } else { natural[place] }
    };
    let mut widths: Vec<f32> = (0..shares.len()).map(wanted).collect();
    let over = widths.iter().sum::<f32>() - available;
    if over > 0.0 {
        shrink(&mut widths, &least, over);
    } else if shares.iter().any(|&share| share > 0.0) {
        widths = shared_out(&widths, &shares, available);
    } else if -over < (1.0 - STRETCH_FROM) * available {
        let extra = -over / widths.len().max(1) as f32;
        widths.iter_mut().for_each(|width| *width += extra);
    }
    widths
}

/// The widest of each column's head and cells by a measure of text, with side air.
fn widths_by(table: &Table, measure: fn(&Text, f32) -> f32) -> Vec<f32> {
    let of_column = |(place, column): (usize, &Column)| {
        let head = head_text(column);
        let unbroken = unbroken_width(&head, TABLE_HEAD.size);
        let head = measure(&head, TABLE_HEAD.size).min(WIDEST_HEAD).max(unbroken);
        let cells = table.rows.iter().filter_map(|row| row.cells.get(place));
        let widest = cells.map(|cell| measure(cell, TABLE.size)).fold(head, f32::max);
        (widest + 2.0 * SIDE).max(NARROWEST)
    };
    table.columns.iter().enumerate().map(of_column).collect()
}

/// Takes `over` from the columns that are wider than their least width, then from all alike.
fn shrink(widths: &mut [f32], least: &[f32], over: f32) {
    let slack: f32 = widths.iter().zip(least).map(|(width, least)| width - least).sum();
    let part = if slack > 0.0 { (over / slack).min(1.0) } else { 0.0 };
    for (width, least) in widths.iter_mut().zip(least) {
        *width -= part * (*width - least);
    }
    let still_over = over - part * slack;
    if still_over > 0.0 {
        let total: f32 = widths.iter().sum();
        widths.iter_mut().for_each(|width| *width *= 1.0 - still_over / total);
    }
}

/// Gives the columns with a share what the fitted columns leave, none less than it needs.
fn shared_out(needed: &[f32], shares: &[f32], available: f32) -> Vec<f32> {
    let mut widths = needed.to_vec();
    let mut sharing: Vec<usize> = (0..shares.len()).filter(|&place| shares[place] > 0.0).collect();
    // Each round settles the columns that need more than their share, so there are at most as many rounds as columns.
    loop {
        let settled: f32 = (0..widths.len()).filter(|place| !sharing.contains(place)).map(|place| needed[place]).sum();
        let weight: f32 = sharing.iter().map(|&place| shares[place]).sum();
        let share = |place: usize| (available - settled) * shares[place] / weight;
        let before = sharing.len();
        sharing.retain(|&place| share(place) >= needed[place]);
        if sharing.len() == before {
            for &place in &sharing {
                widths[place] = share(place);
            }
            return widths;
        }
    }
}

/// The table with the tone's word before the first cell of each row whose cells do not say it.
fn with_words_for_tones(table: &Table) -> Table {
    let mut table = table.clone();
    for row in &mut table.rows {
        let Some(word) = row.tone.word() else {
            continue;
        };
        let said = row.cells.iter().any(|cell| says(&cell.to_plain(), word));
        if let (false, Some(cell)) = (said, row.cells.first_mut()) {
            let text = std::mem::take(cell);
            *cell = Text::default().strong(word).plain(" ");
            cell.0.extend(text.0);
        }
    }
    table
}

/// Whether the text has the word, in whichever case, not as a part of another.
fn says(text: &str, word: &str) -> bool {
    text.split(|letter: char| !letter.is_alphanumeric()).any(|part| part.to_lowercase() == word)
}

fn caption_strips(table: &Table) -> Vec<Strip> {
    let Some(caption) = &table.caption else {
        return Vec::new();
    };
    let lines = wrap(&Text::default().strong(caption), SMALL.size, BODY_WIDTH);
    let cell = Cell { x: 0.0, width: BODY_WIDTH, align: Default::default(), lines, colour: SOFT_INK };
    let mut strips = keep_together(row(&[cell], SMALL, Breaking::AsParagraph));
    if let Some(end) = strips.pop() {
        strips.push(Strip { keep_with_next: true, ..end.padded(0.0, 4.0) });
    }
    strips
}

fn head_text(column: &Column) -> Text {
    Text::default().strong(&column.head)
}

/// The head on its band, one strip; columns' heads stand at its foot.
fn head_strip(table: &Table, widths: &[f32], total: f32) -> Strip {
    let mut cells = cells(widths, |place, width| {
        let column = &table.columns[place];
        let mut lines = wrap(&head_text(column), TABLE_HEAD.size, width);
        if lines.len() > LINES_IN_HEAD {
            lines.truncate(LINES_IN_HEAD - 1);
            lines.push(one_line("…", Style::Strong, TABLE_HEAD.size, width));
        }
        Cell { x: 0.0, width, align: column.align, lines, colour: ACCENT }
    });
    let tallest = cells.iter().map(|cell| cell.lines.len()).max().unwrap_or(0);
    for cell in &mut cells {
        let missing = tallest - cell.lines.len();
        cell.lines.splice(0..0, vec![Default::default(); missing]);
    }
    let strip = row(&cells, TABLE_HEAD, Breaking::Whole).pop().unwrap_or_default();
    strip.padded(3.5, 4.0).with_ground(0.0, total, BAND).with_rule_below(0.0, total, 0.8, ACCENT)
}

fn row_strips(table_row: &Row, table: &Table, widths: &[f32], total: f32) -> Vec<Strip> {
    let colour = if table_row.tone == Tone::Quiet { SOFT_INK } else { INK };
    let empty = Text::default();
    let cells = cells(widths, |place, width| {
        let text = table_row.cells.get(place).unwrap_or(&empty);
        Cell { x: 0.0, width, align: table.columns[place].align, lines: wrap(text, TABLE.size, width), colour }
    });
    let mut strips = row(&cells, TABLE, Breaking::Whole);
    let last = strips.len().saturating_sub(1);
    for (place, strip) in strips.iter_mut().enumerate() {
        let above = if place == 0 { ABOVE_ROW } else { 0.0 };
        let below = if place == last { BELOW_ROW } else { 0.0 };
        *strip = std::mem::take(strip).padded(above, below);
        if place == last {
            *strip = std::mem::take(strip).with_rule_below(0.0, total, HAIRLINE, RULE);
        }
        if let (Some(colour), Some(_)) = (tone_colour(table_row.tone), table_row.tone.word()) {
            strip.marks.push(Mark::Fill { x: 0.0, y: 0.0, width: BAR, height: strip.height - HAIRLINE, colour });
        }
    }
    strips
}

/// A cell for each column, made from the column's number and the width inside its side air, and put into its place.
fn cells(widths: &[f32], make: impl Fn(usize, f32) -> Cell) -> Vec<Cell> {
    let mut left = 0.0;
    let mut cells = Vec::new();
    for (place, &width) in widths.iter().enumerate() {
        cells.push(Cell { x: left + SIDE, ..make(place, width - 2.0 * SIDE) });
        left += width;
    }
    cells
}

#[cfg(test)]
mod tests {
    use super::*;

    fn table(columns: Vec<Column>, rows: Vec<Vec<&str>>) -> Table {
        let row = |cells: Vec<&str>| Row::plain(cells.into_iter().map(Text::from).collect());
        Table { caption: None, columns, rows: rows.into_iter().map(row).collect() }
    }

    #[test]
    fn fitted_columns_hold_their_widest_cell_and_shares_fill_the_width() {
        let table = table(
            vec![
                Column::fit("Couple"),
                Column::number("E, V"),
                Column::share("Remark", 1.0),
                Column::share("Source", 2.0),
            ],
            vec![vec!["Fe³⁺/Fe²⁺", "0.771", "fast", "NBS"], vec!["ClO⁻/Cl⁻", "0.890", "slow", "NBS"]],
        );
        let widths = column_widths(&table, 400.0);
        let widest = natural_width(&Text::from("Fe³⁺/Fe²⁺"), TABLE.size);
        assert!((widths[0] - widest - 2.0 * SIDE).abs() < 0.1);
        assert!((widths.iter().sum::<f32>() - 400.0).abs() < 0.1);
        assert!((widths[3] / widths[2] - 2.0).abs() < 0.01);
    }

    #[test]
    fn columns_never_exceed_the_width() {
        let long = "a statement of some length that will have to be wrapped ".repeat(8);
        let unbroken = "x".repeat(300);
        for count in [1, 2, 5, 14] {
            let columns = (0..count).map(|place| Column::fit(format!("head {place}"))).collect();
            let rows = vec![vec![long.as_str(); count], vec![unbroken.as_str(); count]];
            let widths = column_widths(&table(columns, rows), BODY_WIDTH);
            assert!(widths.iter().sum::<f32>() <= BODY_WIDTH + 0.1, "{widths:?}");
            assert!(widths.iter().all(|&width| width > 2.0 * SIDE), "{widths:?}");
        }
    }

    #[test]
    fn a_tone_that_no_cell_names_is_put_into_words() {
        let mut table = table(vec![Column::fit("Subject")], vec![vec!["reactor shell"], vec!["Review: agitator"]]);
        table.rows[0].tone = Tone::Act;
        table.rows[1].tone = Tone::Review;
        let said = with_words_for_tones(&table);
        assert_eq!(said.rows[0].cells[0].to_plain(), "act reactor shell");
        assert_eq!(said.rows[1].cells[0].to_plain(), "Review: agitator");
    }

    #[test]
    fn a_table_without_columns_or_rows_is_harmless() {
        assert_eq!(column_widths(&Table::default(), BODY_WIDTH).len(), 0);
        table_strips(&Table::default());
        table_strips(&table(vec![Column::fit("Only head")], vec![vec![]]));
    }
}
