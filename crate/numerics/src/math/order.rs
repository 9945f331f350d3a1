//! Putting in order. All of it goes through one copy of the library's sort, of places instead of things: a copy for each
//! kind of thing would make the module 60,000 bytes larger, and few things are many.

use core::cmp::Ordering;

/// The places of so many things, sorted as `compare` says of two places; equal things stay as they stand.
pub fn order(count: usize, compare: &dyn Fn(usize, usize) -> Ordering) -> Vec<usize> {
    let mut places: Vec<usize> = (0..count).collect();
    places.sort_by(|a, b| compare(*a, *b));
    places
}

/// Sorts things by a number, the lowest first (`f64::total_cmp`); equal ones stay as they stand.
pub fn sort_by_number<T: Clone>(things: &mut Vec<T>, number: impl Fn(&T) -> f64) {
    let numbers: Vec<f64> = things.iter().map(number).collect();
    let places = order(things.len(), &|a, b| numbers[a].total_cmp(&numbers[b]));
    *things = places.into_iter().map(|place| things[place].clone()).collect();
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn equal_things_stay_as_they_stand() {
        let mut things = vec![(2.0, 'a'), (-0.0, 'b'), (2.0, 'c'), (f64::NAN, 'd'), (0.0, 'e'), (-1.0, 'f')];
        let mut expected = things.clone();
        expected.sort_by(|a, b| a.0.total_cmp(&b.0));
        sort_by_number(&mut things, |thing| thing.0);
        assert_eq!(things.iter().map(|thing| thing.1).collect::<String>(), "fbeacd");
        expected.sort_by(|a, b| b.0.total_cmp(&a.0));
        sort_by_number(&mut things, |thing| -thing.0);
        assert_eq!(format!("{things:?}"), format!("{expected:?}"));
    }
}
