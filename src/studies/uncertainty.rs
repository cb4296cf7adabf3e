//! Values without an exact solution: a table of quantities on three grids or more, read and put through the procedure of
//! [`crate::analysis::uncertainty`].
//!
//! The table is comma-separated with a line of headings. One column says how fine a grid is: `h` (or `step`), a size in any unit, or
//! `cells`, a count. Every other column is a quantity. Rows may come in any order; lines that begin with `#` are skipped.

use std::path::{Path, PathBuf};

use csv::{ReaderBuilder, StringRecord, Trim};
use sha2::{Digest, Sha256};

use crate::analysis::uncertainty::{Convergence, grid_convergence};
use crate::record::{ConvergenceKind, GridTriple, QuantityUncertainty, UncertaintyRecord};

/// Why a table cannot be used: one sentence that names the file, the line, the value and the remedy.
#[derive(Debug, thiserror::Error)]
pub enum TableError {
    /// It cannot be read.
    #[error("the table {path} cannot be read ({source}); give the path of a file with comma-separated values", path = path.display())]
    Unreadable {
        /// The file.
        path: PathBuf,
        /// Why not.
        source: std::io::Error,
    },
    /// A line has another number of values than there are headings.
    #[error("{path}:{line}: the line has {found} value(s) where the headings name {expected}; write one value a column", path = path.display())]
    Ragged {
        /// The file.
        path: PathBuf,
        /// The line, from 1.
        line: u64,
        /// Values of the line.
        found: usize,
        /// Headings.
        expected: usize,
    },
    /// The text is no UTF-8 or no table.
    #[error("{path}: {reason}; write comma-separated values in UTF-8", path = path.display())]
    NoTable {
        /// The file.
        path: PathBuf,
        /// What the reader says.
        reason: String,
    },
    /// The headings lack a column.
    #[error("{path}:{line}: the headings are {found}; {remedy}", path = path.display())]
    Headings {
        /// The file.
        path: PathBuf,
        /// The line, from 1.
        line: u64,
        /// The headings as they stand.
        found: String,
        /// What to write.
        remedy: &'static str,
    },
    /// A value is no usable number.
    #[error("{path}:{line}: `{value}` in the column `{column}` is no {wanted}; write a number such as {example}", path = path.display())]
    BadValue {
        /// The file.
        path: PathBuf,
        /// The line, from 1.
        line: u64,
        /// The value as it stands.
        value: String,
        /// Its column.
        column: String,
        /// What is wanted.
        wanted: &'static str,
        /// A value that would do.
        example: &'static str,
    },
    /// Two grids are equally fine.
    #[error("{path}:{line}: the grid `{value}` stands in line {first} already; give each grid once", path = path.display())]
    Twice {
        /// The file.
        path: PathBuf,
        /// The later line.
        line: u64,
        /// The earlier line.
        first: u64,
        /// The size or count.
        value: String,
    },
    /// Fewer than three grids.
    #[error("{path}: the table has {found} grid(s); an apparent order needs at least three, each with its own line", path = path.display())]
    TooFew {
        /// The file.
        path: PathBuf,
        /// Grids in it.
        found: usize,
    },
}

/// Reads a table and takes its grid convergence. `dimensions`: in how many a `cells` column counts the cells of a whole grid, so that
/// h = cells^(-1/dimensions); 1 where it counts them along one direction.
///
/// # Errors
/// The table cannot be read, or is no table of numbers on at least three different grids.
pub fn run(path: &Path, dimensions: usize) -> Result<UncertaintyRecord, TableError> {
    let text = std::fs::read(path).map_err(|source| TableError::Unreadable { path: path.into(), source })?;
    let table = Table::read(path, &text)?;
    let counts = table.headings[table.fineness].eq_ignore_ascii_case("cells");
    let size = |value: f64| if counts { value.powf(-1.0 / dimensions as f64) } else { value };
    let quantities = (0..table.headings.len()).filter(|column| *column != table.fineness);
    let quantities = quantities.map(|column| QuantityUncertainty {
        name: table.headings[column].clone(),
        triples: table.rows.windows(3).map(|grids| triple(grids, table.fineness, column, &size)).collect(),
    });
    Ok(UncertaintyRecord {
        table: path.display().to_string(),
        digest: Sha256::digest(&text).iter().map(|byte| format!("{byte:02x}")).collect(),
        dimensions: counts.then_some(dimensions),
        quantities: quantities.collect(),
    })
}

/// Three neighbouring grids of the sorted table.
fn triple(grids: &[Row], fineness: usize, column: usize, size: &impl Fn(f64) -> f64) -> GridTriple {
    let at = |column: usize, index: usize| grids[index].values[column];
    let sizes = [0, 1, 2].map(|index| size(at(fineness, index)));
    let values = [0, 1, 2].map(|index| at(column, index));
    let found = grid_convergence(sizes, values).expect("the table holds finite values on rising sizes");
    GridTriple {
        sizes,
        values,
        convergence: match found.convergence {
            Convergence::Monotone => ConvergenceKind::Monotone,
            Convergence::Oscillatory => ConvergenceKind::Oscillatory,
            Convergence::Diverging => ConvergenceKind::Diverging,
            Convergence::Stalled => ConvergenceKind::Stalled,
        },
        order: found.order,
        extrapolated: found.extrapolated,
        approximate_error: found.approximate_error,
        extrapolated_error: found.extrapolated_error,
        fine_index: found.fine_index,
        coarse_index: found.coarse_index,
    }
}

/// A table as read: rows from the finest grid to the coarsest.
struct Table {
    headings: Vec<String>,
    /// The column that says how fine a grid is.
    fineness: usize,
    rows: Vec<Row>,
}

struct Row {
    line: u64,
    values: Vec<f64>,
}

impl Table {
    fn read(path: &Path, text: &[u8]) -> Result<Self, TableError> {
        let mut reader = ReaderBuilder::new().trim(Trim::All).comment(Some(b'#')).from_reader(text);
        let headings = reader.headers().map_err(|error| broken(path, text, &error))?.clone();
        let (headings, fineness) = check_headings(path, text, &headings)?;
        let counts = headings[fineness].eq_ignore_ascii_case("cells");
        let mut rows: Vec<Row> = Vec::new();
        for record in reader.records() {
            let record = record.map_err(|error| broken(path, text, &error))?;
            let row = row(path, text, &headings, fineness, &record)?;
            let value = row.values[fineness];
            if let Some(first) = rows.iter().find(|first| first.values[fineness] == value) {
                let (line, first, value) = (row.line, first.line, record[fineness].to_owned());
                return Err(TableError::Twice { path: path.into(), line, first, value });
            }
            rows.push(row);
        }
        if rows.len() < 3 {
            return Err(TableError::TooFew { path: path.into(), found: rows.len() });
        }
        rows.sort_by(|a, b| a.values[fineness].total_cmp(&b.values[fineness]));
        if counts {
            rows.reverse();
        }
        Ok(Self { headings, fineness, rows })
    }
}

fn check_headings(path: &Path, text: &[u8], record: &StringRecord) -> Result<(Vec<String>, usize), TableError> {
    let line = line(text, record.position());
    let headings: Vec<String> = record.iter().map(str::to_owned).collect();
    let quoted: Vec<String> = headings.iter().map(|heading| format!("`{heading}`")).collect();
    let wrong = |remedy| TableError::Headings { path: path.into(), line, found: quoted.join(", "), remedy };
    let is_fineness = |heading: &String| ["h", "step", "cells"].iter().any(|known| heading.eq_ignore_ascii_case(known));
    let mut columns = headings.iter().enumerate().filter(|(_, heading)| is_fineness(heading)).map(|(column, _)| column);
    match (columns.next(), columns.next()) {
        (Some(_), None) if headings.len() < 2 => Err(wrong("add a column with the values of a quantity")),
        (Some(fineness), None) => Ok((headings, fineness)),
        (None, _) => Err(wrong("name the column of the cell sizes `h`, or that of the counts of cells `cells`")),
        (Some(_), Some(_)) => Err(wrong("keep one of the columns `h`, `step` and `cells`")),
    }
}

/// The line of a record, from 1. The reader's own position is where the record before ended: lines that it skips come on top.
fn line(text: &[u8], position: Option<&csv::Position>) -> u64 {
    let Some(position) = position else { return 1 };
    let rest = text.get(position.byte() as usize..).unwrap_or_default();
    let skipped = |line: &&[u8]| line.trim_ascii().is_empty() || line.starts_with(b"#");
    position.line() + rest.split(|byte| *byte == b'\n').take_while(skipped).count() as u64
}

fn row(
    path: &Path,
    text: &[u8],
    headings: &[String],
    fineness: usize,
    record: &StringRecord,
) -> Result<Row, TableError> {
    let line = line(text, record.position());
    let number = |(column, value): (usize, &str)| {
        let parsed = value.parse::<f64>().ok().filter(|number| number.is_finite());
        let good = parsed.filter(|number| column != fineness || *number > 0.0);
        let wanted = if column == fineness { "positive number" } else { "finite number" };
        let example = if headings[column].eq_ignore_ascii_case("cells") { "4500" } else { "0.025" };
        let (path, value, column) = (path.into(), value.to_owned(), headings[column].clone());
        good.ok_or(TableError::BadValue { path, line, value, column, wanted, example })
    };
    Ok(Row { line, values: record.iter().enumerate().map(number).collect::<Result<_, _>>()? })
}

fn broken(path: &Path, text: &[u8], error: &csv::Error) -> TableError {
    match error.kind() {
        csv::ErrorKind::UnequalLengths { pos, expected_len, len } => TableError::Ragged {
            path: path.into(),
            line: line(text, pos.as_ref()),
            found: *len as usize,
            expected: *expected_len as usize,
        },
        _ => TableError::NoTable { path: path.into(), reason: error.to_string() },
    }
}

#[cfg(test)]
mod tests {
    //! Trusted: the worked examples of Celik et al. (2008), printed digits from memory; the procedure itself is tested with it.
    use super::*;
    use crate::analysis::compare::agree;

    fn read(text: &str, dimensions: usize) -> Result<UncertaintyRecord, TableError> {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("table.csv");
        std::fs::write(&path, text).unwrap();
        run(&path, dimensions)
    }

    fn sentence(text: &str) -> String {
        let said = read(text, 1).unwrap_err().to_string();
        said[said.find("table.csv").unwrap()..].to_owned()
    }

    #[test]
    fn a_published_example_comes_back_from_rows_in_any_order() {
        // The second and the third column of the published table, with a comment, spaces and the rows shuffled.
        let text =
            "# plane grids\ncells, drag , lift\n4500, 10.725, 5.9624\n980, 10.605, 6.0909\n18000, 10.788, 6.0042\n";
        let found = read(text, 2).unwrap();
        assert_eq!(found.dimensions, Some(2));
        let [drag, lift] = found.quantities.as_slice() else { panic!("two quantities") };
        assert_eq!((drag.name.as_str(), lift.name.as_str()), ("drag", "lift"));
        assert_eq!((drag.triples.len(), drag.triples[0].values), (1, [10.788, 10.725, 10.605]));
        agree(drag.triples[0].order.unwrap(), 0.75, 0.005).unwrap();
        agree(100.0 * drag.triples[0].fine_index.unwrap(), 1.1, 0.05).unwrap();
        assert_eq!(drag.triples[0].convergence, ConvergenceKind::Monotone);
        assert_eq!(lift.triples[0].convergence, ConvergenceKind::Oscillatory);
        agree(lift.triples[0].order.unwrap(), 1.51, 0.005).unwrap();
    }

    #[test]
    fn the_dimensions_of_a_count_change_the_order_and_not_the_extrapolated_value() {
        let text = "cells,q\n100,1.04\n400,1.01\n25,1.16\n";
        let (line, plane) = (read(text, 1).unwrap(), read(text, 2).unwrap());
        let of = |record: &UncertaintyRecord| record.quantities[0].triples[0].clone();
        // 1 + 4 / N: first order in 1 / N, second in N^(-1/2).
        agree(of(&line).order.unwrap(), 1.0, 1e-9).unwrap();
        agree(of(&plane).order.unwrap(), 2.0, 1e-9).unwrap();
        agree(of(&plane).extrapolated.unwrap(), 1.0, 1e-12).unwrap();
        agree(of(&line).extrapolated.unwrap(), 1.0, 1e-12).unwrap();
    }

    #[test]
    fn every_three_neighbours_are_weighed_the_finest_first() {
        let found = read("h,q\n1,2\n2,5\n4,17\n8,1\n", 1).unwrap();
        let triples = &found.quantities[0].triples;
        assert_eq!((triples.len(), triples[0].sizes, triples[1].sizes), (2, [1.0, 2.0, 4.0], [2.0, 4.0, 8.0]));
        assert_eq!((triples[0].convergence, found.dimensions), (ConvergenceKind::Monotone, None));
    }

    #[test]
    fn a_bad_table_is_told_in_one_sentence_with_its_line() {
        assert_eq!(
            sentence("h,q\n1,2\n2,x7\n4,1\n"),
            "table.csv:3: `x7` in the column `q` is no finite number; write a number such as 0.025"
        );
        assert_eq!(
            sentence("h,q\n1,2\n\n-2,3\n4,1\n"),
            "table.csv:4: `-2` in the column `h` is no positive number; write a number such as 0.025"
        );
        assert_eq!(
            sentence("h,q\n1,NaN\n2,3\n4,1\n"),
            "table.csv:2: `NaN` in the column `q` is no finite number; write a number such as 0.025"
        );
        assert_eq!(
            sentence("h,q\n1,2\n2\n4,1\n"),
            "table.csv:3: the line has 1 value(s) where the headings name 2; write one value a column"
        );
        assert_eq!(
            sentence("n,q\n1,2\n"),
            "table.csv:1: the headings are `n`, `q`; name the column of the cell sizes `h`, or that of the counts of cells `cells`"
        );
        assert_eq!(sentence("h\n1\n"), "table.csv:1: the headings are `h`; add a column with the values of a quantity");
        assert_eq!(
            sentence("h,cells,q\n"),
            "table.csv:1: the headings are `h`, `cells`, `q`; keep one of the columns `h`, `step` and `cells`"
        );
        assert_eq!(
            sentence("h,q\n1,2\n2,3\n1.0,1\n"),
            "table.csv:4: the grid `1.0` stands in line 2 already; give each grid once"
        );
        assert_eq!(
            sentence("h,q\n1,2\n2,3\n"),
            "table.csv: the table has 2 grid(s); an apparent order needs at least three, each with its own line"
        );
        let missing = run(Path::new("no-such-table.csv"), 1).unwrap_err().to_string();
        assert!(missing.starts_with("the table no-such-table.csv cannot be read"), "{missing}");
    }
}
