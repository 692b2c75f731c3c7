//! Measured points of a titration: a small CSV file with a head line.

use crate::problem::ReadingsPoint;
use crate::quantity::Decimal;

/// Most points of one file.
const MOST_POINTS: usize = 20_000;

/// Reads `volume_mL,pH` or `volume_mL,mV`; separators are commas, semicolons or tabs. Says whether the signal is in millivolts.
///
/// # Errors
/// A sentence part with the line.
pub(super) fn read(bytes: &[u8]) -> Result<(Vec<ReadingsPoint>, bool), String> {
    let text = std::str::from_utf8(bytes)
        .map_err(|error| format!("not UTF-8 at byte {}", error.valid_up_to()))?;
    let text = text.strip_prefix('\u{feff}').unwrap_or(text);
    let mut lines = text.lines().enumerate().filter(|(_, line)| {
        let line = line.trim();
        !line.is_empty() && !line.starts_with('#')
    });
    let (_, head) = lines.next().ok_or("the file is empty")?;
    let names: Vec<String> = fields(head).map(str::to_lowercase).collect();
    let volume = column(&names, &["volume_ml", "volume", "v_ml"])
        .ok_or("no column `volume_mL` in the first line")?;
    let ph = column(&names, &["ph"]);
    let millivolts = column(&names, &["mv", "e_mv"]);
    let signal = ph
        .or(millivolts)
        .ok_or("no column `pH` or `mV` in the first line")?;
    let mut points = Vec::new();
    for (index, line) in lines {
        let number = |column: usize| {
            let field = fields(line).nth(column).unwrap_or_default();
            Decimal::parse(field)
                .map(Decimal::to_f64)
                .map_err(|error| format!("line {}, column {}: {error}", index + 1, column + 1))
        };
        points.push(ReadingsPoint {
            line: index + 1,
            volume_ml: number(volume)?,
            signal: number(signal)?,
        });
        if points.len() > MOST_POINTS {
            return Err(format!("more than {MOST_POINTS} readings"));
        }
    }
    if points.len() < 3 {
        return Err("fewer than three readings".to_owned());
    }
    for pair in points.windows(2) {
        if let [first, second] = pair
            && second.volume_ml < first.volume_ml
        {
            return Err(format!(
                "line {}: the volume is smaller than in the line before",
                second.line
            ));
        }
    }
    Ok((points, ph.is_none()))
}

fn column(names: &[String], wanted: &[&str]) -> Option<usize> {
    names
        .iter()
        .position(|name| wanted.contains(&name.as_str()))
}

fn fields(line: &str) -> impl Iterator<Item = &str> {
    line.split([',', ';', '\t'])
        .map(|field| field.trim().trim_matches('"'))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn points_keep_their_lines() {
        let (points, millivolts) =
            read(b"# run 17\nvolume_mL,pH\n0.00,2.1\n\n1.00,2.3\n2.00,2.6\n").unwrap();
        assert!(!millivolts);
        assert_eq!(
            points.iter().map(|point| point.line).collect::<Vec<_>>(),
            [3, 5, 6]
        );
    }

    #[test]
    fn faults_name_the_line() {
        assert_eq!(
            read(b"volume_mL,pH\n0,2\n1,x\n2,3\n").unwrap_err(),
            "line 3, column 2: 'x' is not part of a number"
        );
        assert!(
            read(b"volume_mL,pH\n2,2\n1,3\n3,4\n")
                .unwrap_err()
                .contains("line 3")
        );
    }
}
