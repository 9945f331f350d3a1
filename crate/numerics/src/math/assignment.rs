/// Pairs rows with columns one to one so that the sum of their gains is largest; `gain` is row-major. Gives the column of
/// each row; of rows that outnumber the columns some have none. Shortest augmenting paths (Jonker & Volgenant 1987,
/// Computing 38:325–340) in the rectangular form of Crouse 2016, IEEE Trans Aerosp Electron Syst 52:1679–1696; of equal
/// paths the one to a free column, then the one to the lowest index is taken.
///
/// # Panics
/// If `gain` has another number of entries than rows times columns.
pub fn assignment(rows: usize, columns: usize, gain: &[f64]) -> Vec<Option<usize>> {
    assert_eq!(gain.len(), rows * columns);
    if rows <= columns {
        return augment(rows, columns, |row, column| -gain[row * columns + column]);
    }
    let mut of_row = vec![None; rows];
    let of_column = augment(columns, rows, |column, row| -gain[row * columns + column]);
    for (column, row) in of_column.into_iter().enumerate() {
        if let Some(row) = row {
            of_row[row] = Some(column);
        }
    }
    of_row
}

/// Least cost, for at most as many rows as columns.
fn augment(rows: usize, columns: usize, cost: impl Fn(usize, usize) -> f64) -> Vec<Option<usize>> {
    let (mut u, mut v) = (vec![0.0; rows], vec![0.0; columns]);
    let mut column_of = vec![None; rows];
    let mut row_of: Vec<Option<usize>> = vec![None; columns];
    for start in 0..rows {
        let mut shortest = vec![f64::INFINITY; columns];
        let mut before = vec![start; columns];
        let mut visited_rows = vec![start];
        let mut visited = vec![false; columns];
        let (mut row, mut least) = (start, 0.0);
        let end = loop {
            let mut next: Option<usize> = None;
            for column in (0..columns).filter(|column| !visited[*column]) {
                let length = least + cost(row, column) - u[row] - v[column];
                if length < shortest[column] {
                    shortest[column] = length;
                    before[column] = row;
                }
                let better = next.is_none_or(|best| {
                    let free = row_of[column].is_none() && row_of[best].is_some();
                    shortest[column] < shortest[best] || (shortest[column] == shortest[best] && free)
                });
                if better {
                    next = Some(column);
                }
            }
            // There are no fewer columns than rows: one is always left.
            let Some(column) = next else { return column_of };
            least = shortest[column];
            visited[column] = true;
            match row_of[column] {
                None => break column,
                Some(taken) => {
                    row = taken;
                    visited_rows.push(taken);
                }
            }
        };
        for &row in &visited_rows {
            u[row] += least - column_of[row].map_or(0.0, |column: usize| shortest[column]);
        }
        for column in (0..columns).filter(|column| visited[*column]) {
            v[column] -= least - shortest[column];
        }
        let mut column = end;
        loop {
            let row = before[column];
            row_of[column] = Some(row);
            let freed = column_of[row].replace(column);
            match freed {
                Some(freed) if row != start => column = freed,
                _ => break,
            }
        }
    }
    column_of
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn small_cases_by_hand() {
        // Taking the largest entry first would give 9 + 1; the best is 8 + 7.
        assert_eq!(assignment(2, 2, &[9.0, 8.0, 7.0, 1.0]), [Some(1), Some(0)]);
        assert_eq!(assignment(3, 1, &[1.0, 3.0, 2.0]), [None, Some(0), None]);
        assert_eq!(assignment(1, 3, &[1.0, 3.0, 3.0]), [Some(1)]);
        assert_eq!(assignment(3, 3, &[0.5; 9]), [Some(0), Some(1), Some(2)]);
        assert!(assignment(0, 4, &[]).is_empty());
        assert_eq!(assignment(2, 0, &[]), [None, None]);
    }
}
