//! The four forms of a report, text to text, without a server. The report is made up: what matters is how it is written.

use risefall::finding::Report;
use risefall::method::{Column, Datum, Fact, Table};
use risefall::problem::{Problem, ProblemKind};
use risefall::reply::{Fault, Presentation, Reply, problem, write};

fn report() -> Report {
    Report {
        method: "some-test",
        method_title: "Some test",
        indicator: "Waits & \"calls\" <A>".into(),
        conclusion: "rising",
        sentence: "A rise is shown, as far as this goes.".into(),
        p: Some(1e-40),
        p_by: Some("exact".into()),
        statistic: Some(("T", 4.0)),
        facts: vec![
            Fact::new("readings", "Readings", 8_usize),
            Fact::new("slope", "Slope", 0.1 + 0.2).unit("minutes a week"),
            Fact::new("least_rises", "Least number of rises", Datum::Nothing),
        ],
        evidence: vec![Table {
            caption: "Pairs".into(),
            columns: vec![Column { key: "pair", label: "Pair" }, Column { key: "value", label: "Its value" }],
            rows: vec![vec![1_usize.into(), 2.5.into()], vec![2_usize.into(), "fair, good".into()]],
        }],
        cautions: vec!["1 of 4 pairs is a tie;\nit was left out.".into()],
        understood: vec![Fact::new("missing", "Without a value", 0_usize)],
    }
}

fn presented(reply: Reply, give: Option<&str>) -> Presentation {
    Presentation { reply, give: give.map(str::to_owned), fault: Fault::Status }
}

#[track_caller]
fn check(reply: Reply, give: Option<&str>, expected: &str) {
    assert_eq!(write(&report(), &presented(reply, give)).unwrap().body, expected);
}

#[test]
fn json_is_the_reply_contract() {
    let expected = concat!(
        r#"{"method":"some-test","indicator":"Waits & \"calls\" <A>","#,
        r#""conclusion":{"word":"rising","sentence":"A rise is shown, as far as this goes."},"#,
        r#""p":1e-40,"p_by":"exact","statistic":{"name":"T","value":4.0},"#,
        r#""facts":[{"key":"readings","label":"Readings","value":8,"unit":null},"#,
        r#"{"key":"slope","label":"Slope","value":0.30000000000000004,"unit":"minutes a week"},"#,
        r#"{"key":"least_rises","label":"Least number of rises","value":null,"unit":null}],"#,
        r#""evidence":[{"caption":"Pairs","columns":[{"key":"pair","label":"Pair"},{"key":"value","label":"Its value"}],"#,
        r#""rows":[[1,2.5],[2,"fair, good"]]}],"#,
        r#""cautions":["1 of 4 pairs is a tie;\nit was left out."],"#,
        r#""understood":[{"key":"missing","label":"Without a value","value":0,"unit":null}]}"#,
    );
    check(Reply::Json, None, expected);
    check(Reply::Json, Some("p"), r#"{"p":1e-40}"#);
    check(Reply::Json, Some("least_rises"), r#"{"least_rises":null}"#);
    check(
        Reply::Json,
        Some("evidence"),
        r#"{"evidence":[{"caption":"Pairs","columns":[{"key":"pair","label":"Pair"},{"key":"value","label":"Its value"}],"rows":[[1,2.5],[2,"fair, good"]]}]}"#,
    );
}

#[test]
fn text_is_a_block_of_aligned_lines() {
    let expected = "\
Conclusion             rising
Because                A rise is shown, as far as this goes.
Indicator              Waits & \"calls\" <A>
Test                   Some test
p                      1e-40
p is                   exact
T                      4
Readings               8
Slope                  0.30000000000000004 minutes a week
Least number of rises
Caution                1 of 4 pairs is a tie; it was left out.
";
    check(Reply::Text, None, expected);
    check(Reply::Text, Some("p"), "1e-40");
    check(Reply::Text, Some("statistic"), "4");
    check(Reply::Text, Some("conclusion"), "rising");
    check(Reply::Text, Some("least_rises"), "");
    check(Reply::Text, Some("evidence"), "Pairs\nPair   Its value\n   1         2.5\n   2  fair, good\n");
}

#[test]
fn csv_is_one_line_a_fact() {
    let expected = [
        "key,label,value,unit",
        "method,Test,some-test,",
        "indicator,Indicator,\"Waits & \"\"calls\"\" <A>\",",
        "conclusion,Conclusion,rising,",
        "sentence,Because,\"A rise is shown, as far as this goes.\",",
        "p,p,1e-40,",
        "p_by,p is,exact,",
        "statistic,T,4,",
        "readings,Readings,8,",
        "slope,Slope,0.30000000000000004,minutes a week",
        "least_rises,Least number of rises,,",
        "caution,Caution,\"1 of 4 pairs is a tie;\nit was left out.\",",
        "",
    ];
    check(Reply::Csv, None, &expected.join("\r\n"));
    check(Reply::Csv, Some("p"), "p\r\n1e-40\r\n");
    check(Reply::Csv, Some("evidence"), "pair,value\r\n1,2.5\r\n2,\"fair, good\"\r\n");
}

#[test]
fn xml_has_every_fact_right_below_the_root() {
    let expected = concat!(
        "<risefall><method>some-test</method><indicator>Waits &amp; &quot;calls&quot; &lt;A&gt;</indicator>",
        "<conclusion>rising</conclusion><sentence>A rise is shown, as far as this goes.</sentence>",
        "<p>1e-40</p><p_by>exact</p_by><statistic name=\"T\">4</statistic>",
        "<readings label=\"Readings\">8</readings>",
        "<slope label=\"Slope\" unit=\"minutes a week\">0.30000000000000004</slope>",
        "<least_rises label=\"Least number of rises\"></least_rises>",
        "<caution>1 of 4 pairs is a tie;&#10;it was left out.</caution>",
        "<understood><missing label=\"Without a value\">0</missing></understood>",
        "<evidence><table caption=\"Pairs\"><row><pair>1</pair><value>2.5</value></row>",
        "<row><pair>2</pair><value>fair, good</value></row></table></evidence></risefall>",
    );
    check(Reply::Xml, None, expected);
    check(Reply::Xml, Some("p"), "<risefall><p>1e-40</p></risefall>");
}

#[test]
fn an_unknown_fact_is_answered_with_the_nearest_name_and_all_names() {
    let problem = write(&report(), &presented(Reply::Text, Some("slop"))).unwrap_err();
    assert_eq!(
        problem.to_string(),
        "give: this answer has no fact `slop`; did you mean `slope`? \
         The facts are: conclusion, sentence, p, p_by, statistic, method, indicator, readings, slope, least_rises, evidence."
    );
}

#[test]
fn a_problem_is_details_or_a_sentence() {
    let found = Problem::new(ProblemKind::Malformed, "reading", "readings: reading 3, `a<b`, is not understood")
        .help("Correct it, or leave it blank.")
        .at("readings, position 3")
        .value("a<b");
    assert_eq!(
        problem::details(&found, 400, "A reading is wrong.").body,
        concat!(
            r#"{"type":"/problems/reading","title":"A reading is wrong.","status":400,"#,
            r#""detail":"readings: reading 3, `a<b`, is not understood","code":"reading","#,
            r#""place":"readings, position 3","value":"a<b","help":"Correct it, or leave it blank."}"#,
        )
    );
    let sentence = |reply| problem::sentence(&found, &presented(reply, None)).body;
    let plain = "readings: reading 3, `a<b`, is not understood. Correct it, or leave it blank.";
    assert_eq!(sentence(Reply::Text), plain);
    assert_eq!(sentence(Reply::Json), plain);
    assert_eq!(
        sentence(Reply::Xml),
        "<risefall><fault>readings: reading 3, `a&lt;b`, is not understood. Correct it, or leave it blank.</fault></risefall>"
    );
}
