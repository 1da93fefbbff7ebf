//! Plain columns: as wide as their widest cell, two blanks apart.

/// Lays rows out in columns, each line indented; cells may be painted, so the width of a cell is
/// given by its plain text.
pub fn columns(rows: &[Vec<Cell>], indent: usize) -> String {
    let count = rows.iter().map(Vec::len).max().unwrap_or(0);
    let width = |column: usize| {
        rows.iter().filter_map(|row| row.get(column)).map(|cell| cell.width).max().unwrap_or(0)
    };
    let widths: Vec<_> = (0..count).map(width).collect();
    let mut text = String::new();
    for row in rows {
        let mut line = " ".repeat(indent);
        for (cell, width) in row.iter().zip(&widths) {
            line.push_str(&cell.text);
            line.push_str(&" ".repeat(width - cell.width + 2));
        }
        text.push_str(line.trim_end());
        text.push('\n');
    }
    text
}

/// One cell of a table.
#[derive(Debug, Clone)]
pub struct Cell {
    text: String,
    width: usize,
}

impl Cell {
    /// A plain cell.
    pub fn plain(text: impl Into<String>) -> Self {
        let text = text.into();
        Self { width: text.chars().count(), text }
    }

    /// A cell painted by `paint`, as wide as its plain text.
    pub fn painted(text: &str, paint: impl Fn(&str) -> String) -> Self {
        Self { width: text.chars().count(), text: paint(text) }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn paint_does_not_widen_a_column() {
        let rows = [
            vec![Cell::painted("ab", |t| format!("\u{1b}[1m{t}\u{1b}[0m")), Cell::plain("x")],
            vec![Cell::plain("abc"), Cell::plain("y")],
        ];
        assert_eq!(columns(&rows, 1), " \u{1b}[1mab\u{1b}[0m   x\n abc  y\n");
    }
}
