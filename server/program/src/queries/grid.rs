//! Numbers and matrices as short, aligned text.

use operator::{C64, Matrix};

/// Entries this small beside the largest one are rounding noise of an
/// evaluation (a few hundred rounding errors of 1e-16) and shown as 0.
const NOISE: f64 = 1e-13;

/// Magnitudes that are written without an exponent.
const PLAIN: std::ops::Range<f64> = 1e-3..1e5;

/// A number to at most four decimals, or four figures with an exponent.
pub fn number(x: f64) -> String {
    if x == 0.0 {
        return "0".to_owned();
    }
    if !PLAIN.contains(&x.abs()) {
        return format!("{x:.3e}");
    }
    let text = format!("{x:.4}");
    text.trim_end_matches('0').trim_end_matches('.').to_owned()
}

/// An error or a tolerance: two figures and an exponent.
pub fn error(x: f64) -> String {
    if x == 0.0 { "0".to_owned() } else { format!("{x:.1e}") }
}

/// A complex number without a part that is zero.
pub fn complex(z: C64) -> String {
    let imaginary = |x: f64| match number(x).as_str() {
        "1" => "i".to_owned(),
        "-1" => "-i".to_owned(),
        digits => format!("{digits}i"),
    };
    match (z.re == 0.0, z.im == 0.0) {
        (_, true) => number(z.re),
        (true, false) => imaginary(z.im),
        (false, false) => {
            let sign = if z.im < 0.0 { "" } else { "+" };
            format!("{}{sign}{}", number(z.re), imaginary(z.im))
        }
    }
}

/// A matrix as lines of right-aligned columns; noise is shown as 0.
pub fn grid(matrix: &Matrix) -> String {
    let noise = NOISE * matrix.max_abs();
    let clean = |x: f64| if x.abs() <= noise { 0.0 } else { x };
    let cell = |r: usize, c: usize| {
        let z = matrix[(r, c)];
        complex(C64::new(clean(z.re), clean(z.im)))
    };
    let columns: Vec<Vec<String>> =
        (0..matrix.cols()).map(|c| (0..matrix.rows()).map(|r| cell(r, c)).collect()).collect();
    let width = |column: &Vec<String>| column.iter().map(|text| text.chars().count()).max();
    let widths: Vec<usize> = columns.iter().map(|column| width(column).unwrap_or(0)).collect();
    let line = |r: usize| {
        let cells = columns.iter().zip(&widths);
        let cells: Vec<String> = cells.map(|(column, &w)| format!("{:>w$}", column[r])).collect();
        cells.join("  ")
    };
    (0..matrix.rows()).map(line).collect::<Vec<_>>().join("\n")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_are_short() {
        for (x, text) in [
            (0.0, "0"),
            (-0.0, "0"),
            (1.0, "1"),
            (-2.5, "-2.5"),
            (0.5_f64.sqrt(), "0.7071"),
            (1e-7, "1.000e-7"),
            (123_456.0, "1.235e5"),
            (0.001, "0.001"),
            (99_999.999_99, "100000"),
        ] {
            assert_eq!(number(x), text);
        }
        assert_eq!((error(3.14e-15), error(0.0)), ("3.1e-15".to_owned(), "0".to_owned()));
    }

    #[test]
    fn a_matrix_is_aligned_and_free_of_noise() {
        let h = 0.5_f64.sqrt();
        let entries =
            [C64::new(h, 0.0), C64::new(1e-17, -1.0), C64::new(0.5, 0.5), C64::new(-h, 1e-17)];
        let expected = "  0.7071       -i\n0.5+0.5i  -0.7071";
        assert_eq!(grid(&Matrix::from_rows(2, 2, &entries)), expected);
        assert_eq!(grid(&Matrix::zeros(0, 0)), "");
    }
}
