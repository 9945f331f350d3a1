//! What the page carries packed: its own reader of LZMA against another's writer.
use inward_tests::packed::{lettered, lzma};
use inward_tests::{Draw, Node};
use lzma_rust2::LzmaOptions;
use serde_json::json;

/// Bytes with copies near and far, long and short, single repeats, and stretches that nothing foretells.
fn invented(draw: &mut Draw, length: usize) -> Vec<u8> {
    let mut bytes: Vec<u8> = Vec::new();
    while bytes.len() < length {
        let most = [1, 3, 20, 300, 1000][draw.below(5)];
        let count = 1 + draw.below(most);
        let farthest = [4, 100, 200_000][draw.below(3)];
        let distance = 1 + draw.below(bytes.len().clamp(1, farthest));
        match draw.below(4) {
            0 => bytes.extend((0..count).map(|_| draw.below(256) as u8)),
            1 => bytes.extend(std::iter::repeat_n(draw.below(4) as u8, count)),
            _ => (0..count).for_each(|_| bytes.push(*bytes.iter().nth_back(distance - 1).unwrap_or(&7))),
        }
    }
    bytes.truncate(length);
    bytes
}

#[test]
fn the_page_unpacks_what_was_packed_and_refuses_what_is_damaged() {
    let mut draw = Draw::from(11);
    let mut cases = Vec::new();
    for (lc, lp, pb) in [(3, 0, 0), (3, 0, 2), (0, 2, 4), (4, 0, 1), (1, 3, 3)] {
        for length in [0, 1, 2, 300, 20_000, 400_000] {
            let bytes = invented(&mut draw, length);
            let text = lettered(&lzma(&bytes, &LzmaOptions { lc, lp, pb, ..LzmaOptions::default() }));
            cases.push(json!({ "bytes": bytes, "text": text }));
        }
    }
    let printed =
        Node::with_engine().run("js/packed.mjs", &[], &json!(cases).to_string()).unwrap_or_else(|why| panic!("{why}"));
    assert_eq!(
        printed.trim(),
        "a module put together\n30 unpacked, 500 of 500 damaged ones refused, 300 of 300 cut off refused"
    );
}
