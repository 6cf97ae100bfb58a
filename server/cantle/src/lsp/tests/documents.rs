//! Texts are what the client says they are, whatever its habits.

use serde_json::json;

use super::driver::{Editor, range};

#[tokio::test]
async fn four_hundred_changes_keep_their_order() {
    let mut editor = Editor::start(json!({})).await;
    editor.open("a", "start").await;
    let mut expected = "start".to_owned();
    for version in 0..400_usize {
        // Each change stands at a place that only exists, or only is right,
        // after the one before it.
        let at = expected.len() - version % 3;
        let piece = format!("{version},");
        let place = (0, u32::try_from(at).expect("small"));
        let change = json!([{ "range": range(place, place), "text": piece }]);
        editor.change("a", i32::try_from(version).expect("small") + 2, change).await;
        expected.insert_str(at, &piece);
        if version % 7 == 0 {
            let (text, seen) = editor.text("a").await;
            assert_eq!((text, seen), (expected.clone(), version as i64 + 2));
        }
    }
    assert_eq!(editor.text("a").await, (expected, 401));
}

#[tokio::test]
async fn many_changes_in_one_message_apply_one_after_another() {
    let mut editor = Editor::start(json!({})).await;
    editor.open("a", "one\ntwo\nthree\n").await;
    // Versions may jump; `rangeLength` is wrong on purpose.
    let changes = json!([
        { "range": range((1, 0), (2, 0)), "text": "", "rangeLength": 77 },
        { "range": range((1, 0), (1, 5)), "text": "3" },
        { "range": range((0, 3), (1, 0)), "text": " and " },
    ]);
    editor.change("a", 24, changes).await;
    assert_eq!(editor.text("a").await, ("one and 3\n".into(), 24));
    editor.change("a", 25, json!([{ "text": "whole" }])).await;
    assert_eq!(editor.text("a").await, ("whole".into(), 25));
    editor.change("a", 26, json!([])).await;
    assert_eq!(editor.text("a").await, ("whole".into(), 26));
}

#[tokio::test]
async fn columns_count_in_the_negotiated_unit() {
    // The three columns are those of the `b` after one, two and four bytes
    // wide characters, and after one outside the basic plane.
    for (encoding, column) in [("utf-8", 10), ("utf-16", 5), ("utf-32", 4)] {
        let named = json!({ "general": { "positionEncodings": [encoding] } });
        let mut editor = Editor::start(named).await;
        editor.open("a", "first\naπ∞𝛼b\r\nlast").await;
        let change = json!([{ "range": range((1, column), (1, column + 1)), "text": "B" }]);
        editor.change("a", 2, change).await;
        assert_eq!(editor.text("a").await.0, "first\naπ∞𝛼B\r\nlast", "{encoding}");
    }
}

#[tokio::test]
async fn positions_outside_the_text_are_clamped() {
    for (from, to, expected) in [
        ((0, 99), (0, 99), "ab|\r\n𝛼\rc"),
        ((0, 2), (1, 0), "ab|𝛼\rc"),
        ((1, 1), (1, 1), "ab\r\n|𝛼\rc"),
        ((1, 2), (1, 99), "ab\r\n𝛼|\rc"),
        ((2, 0), (2, 0), "ab\r\n𝛼\r|c"),
        ((9, 9), (99, 0), "ab\r\n𝛼\rc|"),
        ((2, 1), (0, 1), "a|"),
        ((0, u32::MAX), (u32::MAX, u32::MAX), "ab|"),
    ] {
        let mut editor = Editor::start(json!({})).await;
        editor.open("a", "ab\r\n𝛼\rc").await;
        editor.change("a", 2, json!([{ "range": range(from, to), "text": "|" }])).await;
        assert_eq!(editor.text("a").await.0, expected, "{from:?} {to:?}");
    }
}

#[tokio::test]
async fn a_text_can_be_opened_again() {
    let mut editor = Editor::start(json!({})).await;
    editor.open("a", "before").await;
    editor.open("a", "after").await;
    assert_eq!(editor.text("a").await, ("after".into(), 1));
}
