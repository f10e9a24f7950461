//! Columns of text, aligned.

/// Where a column's text stands.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Align {
    Left,
    Right,
}

/// Rows of cells under a head of one or more rows.
#[derive(Debug)]
pub(super) struct Table {
    columns: Vec<Align>,
    n_head: usize,
    rows: Vec<Vec<String>>,
}

impl Table {
    pub(super) fn new(columns: Vec<Align>) -> Self {
        Self { columns, n_head: 0, rows: Vec::new() }
    }

    /// One more column, at the right end.
    pub(super) fn column(&mut self, align: Align) {
        self.columns.push(align);
    }

    /// One more row of the head, above the rule.
    pub(super) fn head(&mut self, cells: Vec<String>) {
        self.n_head += 1;
        self.rows.push(cells);
    }

    pub(super) fn row(&mut self, cells: Vec<String>) {
        self.rows.push(cells);
    }

    /// The table, a line a row, a rule under the head, two spaces between columns, none at the end of a line.
    pub(super) fn text(&self) -> String {
        let width = |at: usize| self.rows.iter().filter_map(|row| row.get(at)).map(|c| letters(c)).max().unwrap_or(0);
        let widths: Vec<_> = (0..self.columns.len()).map(width).collect();
        let mut text = String::new();
        for (i, row) in self.rows.iter().enumerate() {
            if i == self.n_head && i > 0 {
                text.push_str(&widths.iter().map(|w| "-".repeat(*w)).collect::<Vec<_>>().join("  "));
                text.push('\n');
            }
            text.push_str(self.line(row, &widths).trim_end());
            text.push('\n');
        }
        text
    }

    fn line(&self, row: &[String], widths: &[usize]) -> String {
        let mut line = String::new();
        for ((cell, width), align) in row.iter().zip(widths).zip(&self.columns) {
            if !line.is_empty() {
                line.push_str("  ");
            }
            let gap = " ".repeat(width - letters(cell));
            match align {
                Align::Left => line.extend([cell.as_str(), &gap]),
                Align::Right => line.extend([&gap, cell.as_str()]),
            }
        }
        line
    }
}

/// Letters of a cell; those used here are one column wide each.
fn letters(cell: &str) -> usize {
    cell.chars().count()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn columns_stand_under_their_heads() {
        let mut table = Table::new(vec![Align::Right, Align::Left, Align::Right]);
        table.head(vec!["Hz".to_owned(), "state".to_owned(), "dB".to_owned()]);
        table.row(vec!["24.96".to_owned(), "clear".to_owned(), "-3".to_owned()]);
        table.row(vec!["124.8".to_owned(), "µ".to_owned(), String::new()]);
        assert_eq!(table.text(), "   Hz  state  dB\n-----  -----  --\n24.96  clear  -3\n124.8  µ\n");
    }

    #[test]
    fn an_empty_table_is_its_head() {
        let mut table = Table::new(vec![Align::Left]);
        table.head(vec!["Hz".to_owned()]);
        assert_eq!(table.text(), "Hz\n");
    }
}
