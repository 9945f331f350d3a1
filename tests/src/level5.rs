//! MATLAB level-5 files put together by hand, low byte first.

/// A file around its elements.
pub fn file(elements: &[Vec<u8>]) -> Vec<u8> {
    let mut file = b"MATLAB 5.0 MAT-file".to_vec();
    file.resize(124, b' ');
    file.extend(b"\0\x01IM");
    elements.iter().for_each(|element| file.extend(element));
    file
}

/// An element: its kind, then data, padded to eight bytes.
pub fn element(kind: u32, data: &[u8]) -> Vec<u8> {
    let mut element = [kind.to_le_bytes(), (data.len() as u32).to_le_bytes()].concat();
    element.extend(data);
    // Packed elements are not padded.
    if kind != 15 {
        element.resize(element.len().next_multiple_of(8), 0);
    }
    element
}

/// A packed element.
pub fn packed(element_inside: &[u8]) -> Vec<u8> {
    element(15, &miniz_oxide::deflate::compress_to_vec_zlib(element_inside, 6))
}

/// A matrix of a class: double 6, text 4, cells 1, structure 2.
pub fn matrix(class: u32, rows: usize, columns: usize, name: &str, rest: &[u8]) -> Vec<u8> {
    let flags = [class.to_le_bytes(), [0; 4]].concat();
    let shape = [(rows as u32).to_le_bytes(), (columns as u32).to_le_bytes()].concat();
    let head = [element(6, &flags), element(5, &shape), element(1, name.as_bytes())].concat();
    element(14, &[&head, rest].concat())
}

/// A word, as it stands in a cell.
pub fn word(text: &str) -> Vec<u8> {
    matrix(4, 1, text.chars().count(), "", &element(16, text.as_bytes()))
}
