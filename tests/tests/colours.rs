//! The colours of the page by computation, in Node.
use inward_tests::Node;

#[test]
fn colours_are_even_and_tell_signs_apart_and_words_stand_out() {
    let printed = Node::with_engine()
        .run("js/colours.test.mjs", &["--test-reporter=spec"], "")
        .unwrap_or_else(|why| panic!("{why}"));
    println!("{printed}");
    assert!(printed.contains("pass 7") && printed.contains("fail 0"), "{printed}");
}
