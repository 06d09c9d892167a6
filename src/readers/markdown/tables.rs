//! *Tables* in Markdown: with pipes, with a drawn grid, and pandoc's simple and multiline tables,
//! whose columns are told by dashes below the header.

/// One row: its cells, each with its text and the number of columns it spans.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Row {
    pub cells: Vec<(String, u32)>,
    pub header: bool,
    /// Index of its first line.
    pub line: usize,
}

/// A table found at the beginning of the lines.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Found {
    pub rows: Vec<Row>,
    /// How many lines it takes.
    pub lines: usize,
}

/// The longest table looked for, in lines.
const LONGEST: usize = 5000;

/// Looks for a table of any kind that begins with the first line.
pub(super) fn table(lines: &[&str]) -> Option<Found> {
    let lines = &lines[..lines.len().min(LONGEST)];
    pipes(lines).or_else(|| grid(lines)).or_else(|| dashes(lines))
}

/// `| a | b |` over `|---|--:|`
fn pipes(lines: &[&str]) -> Option<Found> {
    let first = lines.first()?;
    if !first.contains('|') || !is_pipe_rule(lines.get(1)?) {
        return None;
    }
    let columns = split_pipes(lines[1]).len();
    let mut rows = Vec::new();
    let mut taken = 0;
    for (i, line) in lines.iter().enumerate() {
        if line.trim().is_empty() || !line.contains('|') {
            break;
        }
        taken = i + 1;
        if i == 1 {
            continue;
        }
        let mut cells: Vec<(String, u32)> = split_pipes(line).into_iter().map(|c| (c, 1)).collect();
        cells.resize(columns.max(cells.len()).min(500), (String::new(), 1));
        rows.push(Row {
            cells,
            header: i == 0,
            line: i,
        });
    }
    // A header without words is only there because the notation wants one.
    if rows
        .first()
        .is_some_and(|r| r.cells.iter().all(|(c, _)| c.is_empty()))
    {
        rows.remove(0);
    }
    Some(Found { rows, lines: taken })
}

fn is_pipe_rule(line: &str) -> bool {
    line.contains('-')
        && (line.contains('|') || line.contains('+'))
        && line
            .chars()
            .all(|c| matches!(c, '|' | '-' | ':' | ' ' | '+' | '\t'))
        && !line.trim_start().starts_with('+')
}

/// The cells of a line, cut at pipes that are neither escaped nor in code.
fn split_pipes(line: &str) -> Vec<String> {
    let line = line.trim();
    let line = line.strip_prefix('|').unwrap_or(line);
    let mut cells = Vec::new();
    let mut cell = String::new();
    let mut code = false;
    let mut escaped = false;
    for c in line.chars() {
        if escaped {
            // The backslash before a pipe is of the table, any other of the text.
            if c != '|' {
                cell.push('\\');
            }
            cell.push(c);
            escaped = false;
            continue;
        }
        match c {
            '\\' => escaped = true,
            '|' if !code => cells.push(std::mem::take(&mut cell)),
            c => {
                code ^= c == '`';
                cell.push(c);
            }
        }
    }
    if escaped {
        cell.push('\\');
    }
    if !cell.trim().is_empty() || !line.ends_with('|') {
        cells.push(cell);
    }
    cells.iter().map(|c| c.trim().to_string()).collect()
}

/// A table drawn with `+---+` and `|`.
fn grid(lines: &[&str]) -> Option<Found> {
    let first = lines.first()?.trim_end();
    let indent = first.len() - first.trim_start().len();
    if !is_grid_rule(first) || !lines.get(1)?.trim_start().starts_with('|') {
        return None;
    }
    let mut edges: Vec<usize> = positions(first, '+');
    let mut taken = 0;
    for (i, line) in lines.iter().enumerate() {
        if !line.trim_start().starts_with(['|', '+']) {
            break;
        }
        taken = i + 1;
        // Rows with more columns than the first have their own edges.
        if is_grid_rule(line) {
            for at in positions(line, '+') {
                if !edges.contains(&at) && edges.len() < 200 {
                    edges.push(at);
                }
            }
        }
    }
    edges.sort_unstable();
    let mut rows: Vec<Row> = Vec::new();
    let mut open: Option<Row> = None;
    let mut header_rows = 0;
    for (i, line) in lines[..taken].iter().enumerate() {
        if is_grid_rule(line) {
            rows.extend(open.take());
            if line.contains('=') && header_rows == 0 && i > 0 {
                header_rows = rows.len();
            }
            continue;
        }
        let chars: Vec<char> = line.trim_end().chars().collect();
        let mut cells: Vec<(String, u32)> = Vec::new();
        let mut start = indent;
        let mut span = 0;
        for pair in edges.windows(2) {
            span += 1;
            if matches!(chars.get(pair[1]), Some('|' | '+')) || pair[1] + 1 >= chars.len() {
                let cell: String = chars
                    .get((start + 1).min(chars.len())..pair[1].min(chars.len()))
                    .unwrap_or(&[])
                    .iter()
                    .collect();
                cells.push((cell.trim().to_string(), span));
                start = pair[1];
                span = 0;
            }
        }
        match &mut open {
            Some(row) if row.cells.len() == cells.len() => {
                for (cell, (more, _)) in row.cells.iter_mut().zip(&cells) {
                    append(&mut cell.0, more);
                }
            }
            _ => {
                rows.extend(open.take());
                open = Some(Row {
                    cells,
                    header: false,
                    line: i,
                });
            }
        }
    }
    rows.extend(open);
    for row in rows.iter_mut().take(header_rows) {
        row.header = true;
    }
    Some(Found { rows, lines: taken })
}

fn is_grid_rule(line: &str) -> bool {
    let line = line.trim();
    line.len() > 2
        && line.starts_with('+')
        && line.ends_with('+')
        && line.contains(['-', '='])
        && line.chars().all(|c| matches!(c, '+' | '-' | '=' | ':'))
}

fn positions(line: &str, of: char) -> Vec<usize> {
    let chars = line.trim_end().chars().enumerate();
    chars.filter(|(_, c)| *c == of).map(|(i, _)| i).collect()
}

fn append(cell: &mut String, more: &str) {
    if !more.is_empty() {
        if !cell.is_empty() {
            cell.push('\n');
        }
        cell.push_str(more);
    }
}

/// Pandoc's simple and multiline tables.
fn dashes(lines: &[&str]) -> Option<Found> {
    let (first, second) = (lines.first()?, lines.get(1)?);
    if let Some(columns) = dash_columns(second)
        && columns.len() > 1
        && !first.trim().is_empty()
        && dash_columns(first).is_none()
    {
        // Header, dashes, rows up to an empty line.
        let mut rows = vec![cut(first, &columns, 0, true)];
        let mut taken = 2;
        for (i, line) in lines.iter().enumerate().skip(2) {
            if line.trim().is_empty() {
                break;
            }
            taken = i + 1;
            if dash_columns(line).is_some() {
                break;
            }
            rows.push(cut(line, &columns, i, false));
        }
        return (rows.len() > 1).then_some(Found { rows, lines: taken });
    }
    let columns = dash_columns(first)?;
    if columns.len() > 1 {
        // Without a header: closed by dashes again.
        let end = lines
            .iter()
            .skip(1)
            .position(|line| dash_columns(line).is_some_and(|c| c.len() == columns.len()))?
            + 1;
        let (rows, _) = body(lines, 1, end, &columns);
        return (!rows.is_empty()).then_some(Found { rows, lines: end + 1 });
    }
    // A line of dashes across the table: multiline, its header closed by the dashes of columns.
    if first.trim().len() < 10 {
        return None;
    }
    let rule = lines
        .iter()
        .take(30)
        .position(|line| dash_columns(line).is_some_and(|c| c.len() > 1))?;
    let columns = dash_columns(lines[rule])?;
    if lines[1..rule].iter().any(|line| line.trim().is_empty()) {
        return None;
    }
    let end = lines
        .iter()
        .skip(rule + 1)
        .position(|line| dash_columns(line).is_some_and(|c| c.len() == 1) && line.trim().len() >= 10)?
        + rule
        + 1;
    let mut header = Row {
        cells: Vec::new(),
        header: true,
        line: 1,
    };
    for line in &lines[1..rule] {
        merge(&mut header, cut(line, &columns, 1, true));
    }
    let (mut rows, _) = body(lines, rule + 1, end, &columns);
    if !header.cells.is_empty() {
        rows.insert(0, header);
    }
    Some(Found { rows, lines: end + 1 })
}

/// Rows between two lines; empty lines part rows of several lines, if there are any.
fn body(lines: &[&str], from: usize, to: usize, columns: &[(usize, usize)]) -> (Vec<Row>, bool) {
    let multiline = lines[from..to].iter().any(|line| line.trim().is_empty());
    let mut rows: Vec<Row> = Vec::new();
    let mut fresh = true;
    for (i, line) in lines[..to].iter().enumerate().skip(from) {
        if line.trim().is_empty() {
            fresh = true;
            continue;
        }
        let row = cut(line, columns, i, false);
        match rows.last_mut() {
            Some(last) if multiline && !fresh => merge(last, row),
            _ => rows.push(row),
        }
        fresh = false;
    }
    (rows, multiline)
}

fn merge(row: &mut Row, more: Row) {
    if row.cells.is_empty() {
        row.cells = more.cells;
        return;
    }
    for (cell, (text, _)) in row.cells.iter_mut().zip(&more.cells) {
        append(&mut cell.0, text);
    }
}

/// Runs of dashes, at least one of three or more, and nothing else: where they begin and end.
fn dash_columns(line: &str) -> Option<Vec<(usize, usize)>> {
    let bytes = line.trim_end().as_bytes();
    if bytes.is_empty() || !bytes.iter().all(|b| matches!(b, b'-' | b' ')) {
        return None;
    }
    let mut columns = Vec::new();
    let mut start = None;
    for (i, b) in bytes.iter().chain(b" ").enumerate() {
        match (b, start) {
            (b'-', None) => start = Some(i),
            (b' ', Some(s)) => {
                columns.push((s, i));
                start = None;
            }
            _ => {}
        }
    }
    (columns.iter().any(|(s, e)| e - s >= 3) && columns.len() <= 200).then_some(columns)
}

/// Cuts a line at the columns. A word that reaches over an edge stays whole, in the column where
/// most of it stands.
fn cut(line: &str, columns: &[(usize, usize)], number: usize, header: bool) -> Row {
    let chars: Vec<char> = line.chars().collect();
    let mut cells = vec![String::new(); columns.len()];
    let mut i = 0;
    while i < chars.len() {
        if chars[i].is_whitespace() {
            i += 1;
            continue;
        }
        let start = i;
        // Two spaces end a piece; a single one stays in it unless the next column begins there.
        while i < chars.len() {
            if chars[i].is_whitespace() {
                let next = i + 1;
                let edge = columns.iter().any(|(s, e)| *s == next || *e == i);
                if edge || chars.get(next).is_none_or(|c| c.is_whitespace()) {
                    break;
                }
            }
            i += 1;
        }
        let overlap = |(s, e): (usize, usize)| i.min(e).saturating_sub(start.max(s));
        let best = (0..columns.len())
            .max_by_key(|k| (overlap(columns[*k]), usize::MAX - columns[*k].0.abs_diff(start)))
            .unwrap_or(0);
        let piece: String = chars[start..i].iter().collect();
        if !cells[best].is_empty() {
            cells[best].push(' ');
        }
        cells[best].push_str(&piece);
    }
    Row {
        cells: cells.into_iter().map(|c| (c.trim().to_string(), 1)).collect(),
        header,
        line: number,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn cells(text: &str) -> (Vec<Vec<String>>, usize, usize) {
        let lines: Vec<&str> = text.lines().collect();
        let found = table(&lines).expect("it is a table");
        let headers = found.rows.iter().filter(|r| r.header).count();
        let rows = found
            .rows
            .into_iter()
            .map(|r| r.cells.into_iter().map(|c| c.0).collect())
            .collect();
        (rows, headers, found.lines)
    }

    #[test]
    fn pipe_tables() {
        let (rows, headers, lines) =
            cells("| Plot | *M* |\n|:-----|----:|\n| Mulch | 3.4\\|x |\n| Bare |\nmore\n");
        assert_eq!(
            rows,
            [vec!["Plot", "*M*"], vec!["Mulch", "3.4|x"], vec!["Bare", ""]]
        );
        assert_eq!((headers, lines), (1, 4));
        let (rows, headers, _) = cells("| | |\n|-|-|\n| a | `b|c` |\n");
        assert_eq!(
            (rows, headers),
            (vec![vec!["a".to_string(), "`b|c`".to_string()]], 0)
        );
        assert_eq!(table(&["a | b", "c | d"]), None);
    }

    #[test]
    fn grid_tables() {
        let text = "+------+-------------+\n| Plot | Litres      |\n|      +------+------+\n";
        assert!(table(&text.lines().collect::<Vec<_>>()).is_some());
        let (rows, headers, lines) = cells(
            "+------+-----+\n| Plot | *M* |\n+======+=====+\n| Mul- | 3.4 |\n| ched |     |\n+------+-----+\n| both       |\n+------+-----+\n",
        );
        assert_eq!(
            rows,
            [vec!["Plot", "*M*"], vec!["Mul-\nched", "3.4"], vec!["both"]]
        );
        assert_eq!((headers, lines), (1, 8));
    }

    #[test]
    fn simple_tables() {
        let (rows, headers, lines) = cells(
            "  Plot       M     SD\n------- ------ ------\n  Mulch    3.4    1.1\n  Bare            0.9\n\nText",
        );
        assert_eq!(
            rows,
            [
                vec!["Plot", "M", "SD"],
                vec!["Mulch", "3.4", "1.1"],
                vec!["Bare", "", "0.9"]
            ]
        );
        assert_eq!((headers, lines), (1, 4));
        let (rows, headers, _) = cells("------- ------\n  Mulch    3.4\n  Bare     5.2\n------- ------\n");
        assert_eq!((rows.len(), headers), (2, 0));
    }

    #[test]
    fn multiline_tables() {
        let (rows, headers, lines) = cells(
            "-----------------------\n Plot        Litres\n             per day\n----------- -----------\n Mulched     3.4\n bed\n\n Bare        5.2\n-----------------------\n\nText",
        );
        assert_eq!(
            rows,
            [
                vec!["Plot", "Litres\nper day"],
                vec!["Mulched\nbed", "3.4"],
                vec!["Bare", "5.2"]
            ]
        );
        assert_eq!((headers, lines), (1, 9));
    }

    #[test]
    fn other_lines() {
        for text in [
            "Title\n-----\nText",
            "---\n\nText",
            "- a\n- b",
            "a\n---",
            "-----------\nText\n\nmore",
        ] {
            assert_eq!(table(&text.lines().collect::<Vec<_>>()), None, "{text}");
        }
    }
}
