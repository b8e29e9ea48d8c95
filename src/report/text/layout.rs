//! Tables, lists and lines of at most [`WIDTH`] columns.
//!
//! Lines break at spaces only: a name or a number with its unit is never cut, and one too long for a line runs over it.

use comfy_table::{ColumnConstraint, ContentArrangement, Table, Width, presets};
use textwrap::{Options, WordSeparator, WordSplitter};

/// No line is longer, unless a single name is.
const WIDTH: u16 = 100;

/// Stands for a space at which no line breaks.
const GLUE: char = '\u{a0}';

/// Text that stays on one line.
pub(in crate::report) fn glued(text: &str) -> String {
    text.replace(' ', &GLUE.to_string())
}

/// A title and a table under it; nothing where there is no row.
pub(in crate::report) fn section(title: &str, header: &[&str], rows: &[Vec<String>]) -> String {
    if rows.is_empty() {
        return String::new();
    }
    let mut text = format!("\n{}\n", wrapped(title, "", "  "));
    for line in table(header, rows).lines() {
        text += " ";
        text += &unglued(line.trim_end());
        text += "\n";
    }
    text
}

fn table(header: &[&str], rows: &[Vec<String>]) -> Table {
    let mut table = Table::new();
    table
        .load_style(presets::NOTHING)
        .set_content_arrangement(ContentArrangement::Dynamic)
        .set_width(WIDTH - 2)
        .set_header(header.to_vec())
        .add_rows(rows);
    for (index, column) in table.column_iter_mut().enumerate() {
        let cells = rows.iter().filter_map(|row| row.get(index));
        let words = cells.map(String::as_str).chain(header.get(index).copied());
        let longest = words.map(longest_word).max().unwrap_or(0);
        let with_padding = u16::try_from(longest + 2).unwrap_or(u16::MAX);
        column.set_constraint(ColumnConstraint::LowerBoundary(Width::Fixed(with_padding)));
    }
    table
}

fn longest_word(text: &str) -> usize {
    text.split(' ')
        .map(textwrap::core::display_width)
        .max()
        .unwrap_or(0)
}

/// A title and an item a text; nothing where there is no item.
pub(in crate::report) fn list(title: &str, items: impl Iterator<Item = String>) -> String {
    list_of_blocks(title, items.map(|item| vec![item]))
}

/// A title and an item a block: its first line, then lines set in under it.
pub(in crate::report) fn list_of_blocks(
    title: &str,
    items: impl Iterator<Item = Vec<String>>,
) -> String {
    let items: String = items.map(|lines| block(&lines)).collect();
    if items.is_empty() {
        return items;
    }
    format!("\n{title}\n{items}")
}

fn block(lines: &[String]) -> String {
    let lines = lines.iter().enumerate().map(|(index, line)| match index {
        0 => wrapped(line, "  - ", "    ") + "\n",
        _ => wrapped(line, "      ", "        ") + "\n",
    });
    lines.collect()
}

pub(in crate::report) fn wrapped(text: &str, first: &str, rest: &str) -> String {
    let options = Options::new(WIDTH.into())
        .initial_indent(first)
        .subsequent_indent(rest)
        .word_separator(WordSeparator::AsciiSpace)
        .word_splitter(WordSplitter::NoHyphenation)
        .break_words(false);
    unglued(&textwrap::fill(text, options))
}

fn unglued(text: &str) -> String {
    text.replace(GLUE, " ")
}

pub(in crate::report) fn counted(count: usize, what: &str) -> String {
    match count {
        1 => format!("1 {what}"),
        _ => format!("{count} {what}s"),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Six columns of two words each, which are 102 columns wide side by side.
    #[test]
    fn tables_break_at_spaces_only() {
        let cell = "6-front-left warm-front-half".to_owned();
        let text = section("title", &["name"; 4], &[vec![cell; 4]]);
        assert_eq!(text.matches("6-front-left").count(), 4, "{text}");
        assert_eq!(text.matches("warm-front-half").count(), 4, "{text}");
        assert!(
            text.lines().all(|line| line.chars().count() <= 100),
            "{text}"
        );
    }

    #[test]
    fn glued_text_stays_together() {
        let text = wrapped(&format!("{} {}", "x".repeat(96), glued("+4.52 g")), "", "");
        assert_eq!(text.lines().nth(1), Some("+4.52 g"));
        let row = vec![glued("+4.52 g"), "warm ".repeat(60)];
        assert!(section("title", &["a", "b"], &[row]).contains("+4.52 g"));
    }

    #[test]
    fn prose_keeps_names_with_hyphens_whole() {
        let text = wrapped(&format!("{} 6-front-left", "x".repeat(93)), "", "");
        assert_eq!(text.lines().nth(1), Some("6-front-left"));
    }

    #[test]
    fn a_name_longer_than_a_line_runs_over_it() {
        let name = "n".repeat(150);
        assert!(
            section("title", &["a", "b"], &[vec!["x".to_owned(), name.clone()]]).contains(&name)
        );
        assert!(wrapped(&name, "", "").contains(&name));
    }
}
