//! Delimited text: which encoding, which delimiter, which lines?

use super::Input;
use super::table::{Place, Row, Table};
use crate::diagnostic::{Code, Diagnostic, Level};
use crate::source::Origin;

/// Delimiters tried, the most common first.
const DELIMITERS: [char; 4] = [',', ';', '\t', '|'];
/// Lines looked at to find the delimiter.
const LINES_TRIED: usize = 100;

/// Reads a delimited text file into a table; `None` when nothing is usable.
pub fn read(input: &Input<'_>, diagnostics: &mut Vec<Diagnostic>) -> Option<Table> {
    let file = || Origin::File {
        file: input.name.to_owned(),
    };
    // Line ends are made alike first, so that line numbers are the same whatever program wrote the file.
    let text = decode(input, diagnostics)?
        .replace("\r\n", "\n")
        .replace('\r', "\n");
    if let Some((line, column)) = unclosed_quote(&text) {
        let text = text.lines().nth(line - 1).unwrap_or_default().to_owned();
        diagnostics.push(
            Diagnostic::new(
                Code::RaggedRow,
                Origin::Text {
                    file: input.name.to_owned(),
                    line: u32::try_from(line).unwrap_or(u32::MAX),
                    column,
                    name: None,
                    text,
                    width: 1,
                },
                "the quote opened here is never closed, so the rows after it cannot be told apart; close it or take it away",
            )
            .at(Level::Fatal),
        );
        return None;
    }
    let delimiter = delimiter_of(&text);
    if delimiter != ',' {
        diagnostics.push(Diagnostic::new(
            Code::Delimiter,
            file(),
            format!("fields are delimited by {delimiter:?}"),
        ));
    }
    let mut rows = records(&text, delimiter, input.name, diagnostics).into_iter();
    let Some(header) = rows.next() else {
        diagnostics.push(Diagnostic::new(
            Code::NoRows,
            file(),
            "the file is empty; a roster needs a header such as worker,start,end and one row per shift",
        ));
        return None;
    };
    let mut table = Table {
        file: input.name.to_owned(),
        header,
        rows: Vec::new(),
    };
    table.rows.extend(rows);
    if table.rows.is_empty() {
        diagnostics.push(Diagnostic::new(
            Code::NoRows,
            file(),
            "the file has a header and no data rows",
        ));
        return None;
    }
    Some(table)
}

/// Line and column of a quote that is still open at the end of the text.
///
/// A quote opens only at the start of a field, as the csv crate has it.
fn unclosed_quote(text: &str) -> Option<(usize, u32)> {
    let mut open = None;
    let mut at_field_start = true;
    let (mut line, mut column) = (1, 1);
    for c in text.chars() {
        match (c, open) {
            ('"', None) if at_field_start => open = Some((line, column)),
            // A doubled quote closes and opens again: the end result is the same.
            ('"', Some(_)) => open = None,
            _ => {}
        }
        at_field_start = c == '\n' || DELIMITERS.contains(&c) || (c == '"' && open.is_none());
        column += 1;
        if c == '\n' {
            line += 1;
            column = 1;
        }
    }
    open
}

/// Decodes UTF-8, UTF-16 with a byte-order mark, or Windows-1252.
fn decode(input: &Input<'_>, diagnostics: &mut Vec<Diagnostic>) -> Option<String> {
    let file = Origin::File {
        file: input.name.to_owned(),
    };
    let (bytes, encoding) = match encoding_rs::Encoding::for_bom(input.bytes) {
        Some((encoding, length)) => {
            diagnostics.push(Diagnostic::new(
                Code::ByteOrderMark,
                file.clone(),
                format!("byte-order mark removed, decoded as {}", encoding.name()),
            ));
            (&input.bytes[length..], encoding)
        }
        None => (input.bytes, encoding_rs::UTF_8),
    };
    let (text, broken) = encoding.decode_without_bom_handling(bytes);
    let text = if broken {
        let (text, _) = encoding_rs::WINDOWS_1252.decode_without_bom_handling(bytes);
        text
    } else {
        text
    };
    if let Some((line, byte)) = control_character(&text) {
        diagnostics.push(Diagnostic::new(
            Code::Undecodable,
            file,
            format!(
                "line {line} holds the control character U+{byte:04X}, which no roster text has; the file is not a text table"
            ),
        ));
        return None;
    }
    if broken {
        diagnostics.push(Diagnostic::new(
            Code::NotUtf8,
            file,
            format!(
                "not UTF-8; read as Windows-1252, e.g. {:?}",
                sample_of_foreign_text(&text)
            ),
        ));
    }
    Some(text.into_owned())
}

fn control_character(text: &str) -> Option<(usize, u32)> {
    text.lines().enumerate().find_map(|(index, line)| {
        line.chars()
            .find(|c| c.is_control() && *c != '\t' && *c != '\r')
            .map(|c| (index + 1, u32::from(c)))
    })
}

fn sample_of_foreign_text(text: &str) -> String {
    text.split(|c: char| DELIMITERS.contains(&c) || c == '\n')
        .find(|cell| !cell.is_ascii())
        .map(|cell| cell.trim().chars().take(40).collect())
        .unwrap_or_default()
}

/// The delimiter whose count is highest in the header and the same in most of the first lines.
fn delimiter_of(text: &str) -> char {
    let lines: Vec<&str> = text
        .lines()
        .filter(|line| !line.trim().is_empty())
        .take(LINES_TRIED)
        .collect();
    let count = |line: &str, delimiter: char| line.chars().filter(|c| *c == delimiter).count();
    DELIMITERS
        .into_iter()
        .map(|delimiter| {
            let in_header = lines.first().map_or(0, |line| count(line, delimiter));
            let alike = lines
                .iter()
                .filter(|line| count(line, delimiter) == in_header)
                .count();
            (delimiter, if in_header == 0 { 0 } else { alike })
        })
        // `rev` lets the earlier delimiter win a tie.
        .rev()
        .max_by_key(|(_, alike)| *alike)
        .map_or(',', |(delimiter, _)| delimiter)
}

/// Splits text into rows with the csv crate, blank rows left out, each with its line and the columns of its cells.
fn records(text: &str, delimiter: char, name: &str, diagnostics: &mut Vec<Diagnostic>) -> Vec<Row> {
    let lines: Vec<&str> = text.lines().collect();
    let mut reader = csv::ReaderBuilder::new()
        .has_headers(false)
        .flexible(true)
        .delimiter(u8::try_from(delimiter).unwrap_or(b','))
        .from_reader(text.as_bytes());
    let mut rows = Vec::new();
    for record in reader.records() {
        let Ok(record) = record else {
            // The text is valid UTF-8 and the reader is flexible, so no record can fail; a lost row must still be told.
            diagnostics.push(Diagnostic::new(
                Code::RaggedRow,
                Origin::File {
                    file: name.to_owned(),
                },
                "a row cannot be split into fields and is not used",
            ));
            continue;
        };
        let line = record.position().map_or(1, csv::Position::line);
        // The reader's position of a row may be that of skipped blank lines before it.
        let (line, text) = first_written_line(&lines, line);
        let cells: Vec<String> = record.iter().map(|cell| cell.trim().to_owned()).collect();
        if cells.iter().all(String::is_empty) {
            continue;
        }
        rows.push(Row {
            cells,
            place: Place::Line {
                line,
                spans: spans(text, delimiter),
                text: text.to_owned(),
            },
        });
    }
    rows
}

fn first_written_line<'a>(lines: &[&'a str], from: u64) -> (u32, &'a str) {
    let start = usize::try_from(from).unwrap_or(1).max(1);
    (start..=lines.len())
        .map(|number| (number, lines[number - 1]))
        .find(|(_, line)| !line.is_empty())
        .map_or(
            (u32::try_from(start).unwrap_or(u32::MAX), ""),
            |(number, line)| (u32::try_from(number).unwrap_or(u32::MAX), line),
        )
}

/// 1-based column and width of each field of a line, in characters, quotes left out of neither.
fn spans(line: &str, delimiter: char) -> Vec<(u32, u32)> {
    let mut spans = Vec::new();
    let (mut start, mut at, mut quoted) = (1, 1, false);
    for c in line.chars() {
        if c == '"' {
            quoted = !quoted;
        }
        if c == delimiter && !quoted {
            spans.push((start, at - start));
            start = at + 1;
        }
        at += 1;
    }
    spans.push((start, at - start));
    spans
}

#[cfg(test)]
mod tests {
    use super::*;

    fn table(bytes: &[u8]) -> (Option<Table>, Vec<Diagnostic>) {
        let mut diagnostics = Vec::new();
        let table = read(
            &Input {
                name: "r.csv",
                bytes,
            },
            &mut diagnostics,
        );
        (table, diagnostics)
    }

    fn codes(diagnostics: &[Diagnostic]) -> Vec<&'static str> {
        diagnostics.iter().map(|d| d.code.id()).collect()
    }

    #[test]
    fn blank_lines_do_not_move_the_line_numbers() {
        let (table, _) = table(b"worker,start\n\n\nA,1\n");
        let table = table.unwrap();
        assert_eq!(table.rows[0].number(), 4);
        assert_eq!(
            table.origin(&table.rows[0], 1).to_string(),
            "r.csv:4:3 (start)"
        );
    }

    #[test]
    fn line_numbers_do_not_depend_on_the_line_ends() {
        for text in [
            "worker,start\n\nA,1\nB,2\n",
            "worker,start\r\n\r\nA,1\r\nB,2\r\n",
            "worker,start\r\rA,1\rB,2\r",
        ] {
            let (table, _) = table(text.as_bytes());
            let numbers: Vec<u32> = table.unwrap().rows.iter().map(Row::number).collect();
            assert_eq!(numbers, [3, 4], "{text:?}");
        }
    }

    #[test]
    fn byte_order_marks_and_semicolons_are_noted() {
        let (table, diagnostics) = table("\u{feff}worker;start\nA;1\n".as_bytes());
        assert_eq!(table.unwrap().header.cells, ["worker", "start"]);
        assert_eq!(codes(&diagnostics), ["C01", "C04"]);
    }

    #[test]
    fn text_that_is_not_utf8_is_read_as_windows_1252_with_a_warning() {
        let (table, diagnostics) = table(b"worker,start\n\xC5s,1\n");
        assert_eq!(table.unwrap().rows[0].cells[0], "\u{c5}s");
        assert_eq!(codes(&diagnostics), ["C03"]);
    }

    #[test]
    fn an_unclosed_quote_is_shown_where_it_opens() {
        let (open, diagnostics) = table(b"worker,start\nA,\"1\nB,2\nC,3\n");
        assert!(open.is_none());
        assert_eq!(codes(&diagnostics), ["C06"]);
        assert_eq!(diagnostics[0].origin.to_string(), "r.csv:2:3");
        let (table, _) = table(b"worker,start\n\"A \"\"x\"\"\",1\n");
        assert_eq!(table.unwrap().rows[0].cells[0], "A \"x\"");
    }

    #[test]
    fn bytes_that_are_no_text_are_refused_with_the_line() {
        let (table, diagnostics) = table(b"a,b\n\x00\x01\x02,\xff\n");
        assert!(table.is_none());
        assert_eq!(codes(&diagnostics), ["C17"]);
        assert!(diagnostics[0].message.contains("line 2"));
    }
}
