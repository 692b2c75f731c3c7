//! Measured points of a titration: a small table with a head line.

use crate::problem::ReadingsPoint;
use crate::quantity::Decimal;

/// Most points of one file.
const MOST_POINTS: usize = 20_000;

/// Most faults of one file that are told one by one.
const MOST_FAULTS: usize = 10;

/// What a file of readings holds.
#[derive(Debug, PartialEq)]
pub(super) struct Table {
    /// The points in the order of the file.
    pub(super) points: Vec<ReadingsPoint>,
    /// Whether the signal is in millivolts; pH otherwise.
    pub(super) in_millivolts: bool,
}

/// Reads `volume_mL` with `pH` or `mV`; other columns are passed over. The separator is a semicolon, a tab or a comma, whichever of them
/// the head line has first in this order, so that a decimal comma is found out instead of read as two columns.
///
/// # Errors
/// Every fault as a sentence part with its line.
pub(super) fn read(bytes: &[u8]) -> Result<Table, Vec<String>> {
    let text = std::str::from_utf8(bytes)
        .map_err(|error| vec![format!("not UTF-8 at byte {}", error.valid_up_to())])?;
    let text = text.strip_prefix('\u{feff}').unwrap_or(text);
    let mut lines = text.lines().enumerate().filter(|(_, line)| {
        let line = line.trim();
        !line.is_empty() && !line.starts_with('#')
    });
    let (index, head) = lines.next().ok_or(vec!["the file is empty".to_owned()])?;
    let columns =
        Columns::of(head).map_err(|fault| vec![format!("line {}: {fault}", index + 1)])?;
    let mut points: Vec<ReadingsPoint> = Vec::new();
    let mut faults = Vec::new();
    for (index, line) in lines {
        match columns.point(line, index + 1) {
            Ok(point) => {
                if points
                    .last()
                    .is_some_and(|last| point.volume_ml < last.volume_ml)
                {
                    let line = point.line;
                    faults.push(format!(
                        "line {line}: the volume is smaller than in the line before"
                    ));
                }
                points.push(point);
            }
            Err(fault) => faults.push(format!("line {}: {fault}", index + 1)),
        }
        if faults.len() >= MOST_FAULTS {
            break;
        }
        if points.len() > MOST_POINTS {
            faults.push(format!("more than {MOST_POINTS} readings"));
            break;
        }
    }
    if faults.is_empty() && points.len() < 3 {
        faults.push("fewer than three readings".to_owned());
    }
    if faults.is_empty() {
        Ok(Table {
            points,
            in_millivolts: columns.in_millivolts,
        })
    } else {
        Err(faults)
    }
}

/// Which columns hold what.
struct Columns {
    separator: char,
    count: usize,
    volume: usize,
    signal: usize,
    in_millivolts: bool,
}

impl Columns {
    fn of(head: &str) -> Result<Self, String> {
        let separator = [';', '\t', ',']
            .into_iter()
            .find(|separator| head.contains(*separator))
            .ok_or("one column only; `volume_mL,pH` or `volume_mL,mV` is expected")?;
        let names: Vec<String> = fields(head, separator).map(str::to_lowercase).collect();
        let column = |wanted: &str| names.iter().position(|name| name == wanted);
        let volume = column("volume_ml").ok_or("no column `volume_mL`")?;
        let ph = column("ph");
        let signal = ph
            .or_else(|| column("mv"))
            .ok_or("no column `pH` or `mV`")?;
        Ok(Self {
            separator,
            count: names.len(),
            volume,
            signal,
            in_millivolts: ph.is_none(),
        })
    }

    fn point(&self, line: &str, number: usize) -> Result<ReadingsPoint, String> {
        let cells: Vec<&str> = fields(line, self.separator).collect();
        if cells.len() != self.count {
            let (found, expected) = (cells.len(), self.count);
            return Err(format!(
                "{found} columns where the head line has {expected}"
            ));
        }
        let value = |column: usize, from: f64, to: f64| {
            let cell = cells.get(column).copied().unwrap_or_default();
            let value = Decimal::parse(cell)
                .map(Decimal::to_f64)
                .map_err(|error| format!("column {}: {error}", column + 1))?;
            if (from..=to).contains(&value) {
                Ok(value)
            } else {
                Err(format!("column {}: {cell} is not possible", column + 1))
            }
        };
        let (from, to) = if self.in_millivolts {
            (-2000.0, 2000.0)
        } else {
            (-2.0, 16.0)
        };
        Ok(ReadingsPoint {
            line: number,
            volume_ml: value(self.volume, 0.0, 1e6)?,
            signal: value(self.signal, from, to)?,
        })
    }
}

fn fields(line: &str, separator: char) -> impl Iterator<Item = &str> {
    line.split(separator)
        .map(|field| field.trim().trim_matches('"').trim())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn points_keep_their_lines() {
        let table = read(b"# run 17\nvolume_mL,pH\n0.00,2.1\n\n1.00,2.3\n2.00,2.6\n").unwrap();
        assert!(!table.in_millivolts);
        let lines: Vec<usize> = table.points.iter().map(|point| point.line).collect();
        assert_eq!(lines, [3, 5, 6]);
    }

    #[test]
    fn exports_of_other_separators_and_columns_are_read() {
        let table = read(
            "\u{feff}time;\"volume_mL\";mV\r\n1;0.0;181.2\r\n2;0.5;170.0\r\n3;1.0;-12\r\n"
                .as_bytes(),
        )
        .unwrap();
        assert!(table.in_millivolts);
        assert!((table.points[2].signal + 12.0).abs() < 1e-12);
    }

    #[test]
    fn decimal_commas_are_never_read_as_columns() {
        let commas = read(b"volume_mL;pH\n0,00;2,13\n1,00;2,31\n").unwrap_err();
        assert_eq!(commas[0], "line 2: column 1: a decimal comma; write 0.00");
        let split = read(b"volume_mL,pH\n0,00,2,13\n").unwrap_err();
        assert_eq!(split[0], "line 2: 4 columns where the head line has 2");
    }

    #[test]
    fn every_fault_is_told_with_its_line() {
        let faults = read(b"volume_mL,pH\n0,2\n1,x\n3,3\n2,3\n4,44\n").unwrap_err();
        assert_eq!(
            faults,
            [
                "line 3: column 2: 'x' is not part of a number",
                "line 5: the volume is smaller than in the line before",
                "line 6: column 2: 44 is not possible",
            ]
        );
        assert_eq!(
            read(b"V,pH\n").unwrap_err(),
            ["line 1: no column `volume_mL`"]
        );
        assert_eq!(read(b"").unwrap_err(), ["the file is empty"]);
        assert!(read(b"volume_mL,pH\n0,2\n1,3\n").unwrap_err()[0].contains("fewer"));
    }
}
