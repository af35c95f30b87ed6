//! The registry as data: every test is described, and no two answer to one name.

use std::collections::HashSet;

use risefall::method::METHODS;
use risefall::query::request::shared_parameters;

/// Tests that cards point to before they are registered.
const NOT_YET: [&str; 0] = [];

fn is_name(text: &str, joint: char) -> bool {
    !text.is_empty()
        && text.split(joint).all(|part| !part.is_empty() && part.chars().all(|c| c.is_ascii_lowercase() || c.is_ascii_digit()))
}

#[test]
fn names_are_unique_and_well_formed() {
    let keys: HashSet<&str> = METHODS.iter().map(|method| method.card.key).collect();
    assert_eq!(keys.len(), METHODS.len());
    for method in METHODS {
        assert!(is_name(method.card.key, '-'), "{}", method.card.key);
        let mut names: HashSet<&str> =
            shared_parameters().iter().flat_map(|list| list.iter().map(|parameter| parameter.name)).collect();
        for parameter in method.parameters {
            assert!(is_name(parameter.name, '_'), "{}: {}", method.card.key, parameter.name);
            assert!(names.insert(parameter.name), "{}: {} is taken", method.card.key, parameter.name);
            assert!(parameter.doc.ends_with('.'), "{}: {}", method.card.key, parameter.doc);
        }
    }
}

#[test]
fn cards_are_complete_sentences() {
    for method in METHODS {
        let card = method.card;
        assert!(!card.title.is_empty() && card.question.ends_with('?'), "{}", card.key);
        for text in [card.null_hypothesis, card.exact, card.ties, card.missing].iter().chain(card.assumes) {
            assert!(text.ends_with('.'), "{}: {text}", card.key);
        }
        assert!(!card.cost.is_empty() && !card.assumes.is_empty() && !card.sources.is_empty(), "{}", card.key);
        for source in card.sources {
            let complete = [source.authors, source.title, source.place].iter().all(|text| !text.is_empty());
            assert!(complete && (1800..2100).contains(&source.year), "{}: {source:?}", card.key);
        }
    }
}

#[test]
fn cards_point_to_other_tests_that_exist() {
    for method in METHODS {
        for (other, when) in method.card.fits_better {
            let known = METHODS.iter().any(|method| method.card.key == *other) || NOT_YET.contains(other);
            assert!(known && *other != method.card.key && !when.is_empty(), "{}: {other}", method.card.key);
        }
    }
}
