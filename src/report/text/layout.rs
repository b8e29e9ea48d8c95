//! Tables, lists and lines of at most [`WIDTH`] columns.

use comfy_table::{ContentArrangement, Table, presets};

/// No line is longer.
const WIDTH: u16 = 100;

pub(in crate::report) fn new_table(header: &[&str]) -> Table {
    let mut table = Table::new();
    table
        .load_style(presets::NOTHING)
        .set_content_arrangement(ContentArrangement::Dynamic)
        .set_width(WIDTH - 2)
        .set_header(header.to_vec());
    table
}

pub(in crate::report) fn section(title: &str, table: &Table) -> String {
    let mut text = format!("\n{title}\n");
    for line in table.lines() {
        text += " ";
        text += line.trim_end();
        text += "\n";
    }
    text
}

pub(in crate::report) fn list(title: &str, items: impl Iterator<Item = String>) -> String {
    let items: String = items.map(|i| wrapped(&i, "  - ", "    ") + "\n").collect();
    if items.is_empty() {
        return items;
    }
    format!("\n{title}\n{items}")
}

pub(in crate::report) fn wrapped(text: &str, first: &str, rest: &str) -> String {
    let options = textwrap::Options::new(WIDTH.into())
        .initial_indent(first)
        .subsequent_indent(rest)
        .word_splitter(textwrap::WordSplitter::NoHyphenation);
    textwrap::fill(text, options)
}

pub(in crate::report) fn counted(count: usize, what: &str) -> String {
    match count {
        1 => format!("1 {what}"),
        _ => format!("{count} {what}s"),
    }
}
