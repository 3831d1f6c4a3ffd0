//! Messy tables as people paste and export them. All of them are invented; what is expected was read by eye.

use bandleaf_intake::{
    ColumnKey, ColumnKeys, ColumnOptions, Decimal, Delimiter, Encoding, Intake, OneOrMany, Options, Role, read_bytes,
    read_text,
};

fn read(text: &str) -> Intake {
    read_text(text, &Options::default())
}

/// Reference values and indications of the points.
fn pairs(intake: &Intake) -> Vec<(Option<f64>, Vec<f64>)> {
    let values = |indication: &Option<OneOrMany<f64>>| match indication {
        None => vec![],
        Some(OneOrMany::One(value)) => vec![*value],
        Some(OneOrMany::Many(values)) => values.clone(),
    };
    intake.points.iter().map(|point| (point.reference, values(&point.indication))).collect()
}

fn single(reference: f64, indication: f64) -> (Option<f64>, Vec<f64>) {
    (Some(reference), vec![indication])
}

fn codes(intake: &Intake) -> Vec<&str> {
    intake.problems.iter().map(|problem| problem.code.as_str()).collect()
}

fn question_codes(intake: &Intake) -> Vec<&str> {
    intake.questions.iter().map(|question| question.code.as_str()).collect()
}

#[test]
fn the_same_points_from_many_layouts() {
    let texts = [
        "reference\tindication\n150\t151.5\n400\t402\n",
        "reference,indication\r\n150,151.5\r\n400,402\r\n",
        "Reference / mm;Indication / mm\r150,0;151,5\r400,0;402,0\r",
        "indication [mm];reference [mm]\n151,5;150\n402;400\n",
        "\u{FEFF}true level (mm);gauge reading (mm)\n\n150;151.50\n\n400;402.00\n;\n",
        "reference;indication;;\n150;151,5;;\n400;402,0;;\n",
        "\"reference\",\"indication\"\n\"150,0\",\"151,5\"\n\"400,0\",\"402,0\"\n",
        "   reference   indication\n   150.0   151.5\n   400.0   402.0\n",
        "Data:   reference   indication\n        150.0   151.5\n        400.0   402.0\n",
        "150.0 151.5\n400.0 402.0\n",
        "150,0 151,5\n400,0 402,0\n",
        "150\t151,5\n400\t402,0",
        "reference;reading\nmm;mm\n150;151,5\n400;402\n",
        "sep=;\nreference;reading\n150;151,5\n400;402\n",
        "Logger of tank 3\nSerial no.;12345\nreference;reading\n150;151,5\n400;402\n",
        "no;set point;shown;error\n1;150 mm;151,5 mm;1,5 mm\n2;400 mm;402 mm;2 mm\n",
        "standard reading | instrument reading\n150 | 151.5\n400 | 402.0\n",
        "x,y\n150,151.5\n400,402.0\n",
        "reference;indication\n+150;+151,5\n+4E2;4,02e2\n",
    ];
    for text in texts {
        let intake = read(text);
        assert_eq!(pairs(&intake), [single(150.0, 151.5), single(400.0, 402.0)], "{text:?} {:#?}", intake.problems);
        assert_eq!(intake.questions, [], "{text:?}");
    }
}

#[test]
fn thousands_separators_of_every_kind() {
    for separator in [" ", "\u{2009}", "\u{202F}", "\u{A0}", "'", "\u{2019}", "."] {
        let text = format!(
            "reference;indication\n1{separator}234,50;1{separator}235,5\n12{separator}345,25;12{separator}346,0\n"
        );
        let intake = read(&text);
        assert_eq!(pairs(&intake), [single(1234.5, 1235.5), single(12345.25, 12346.0)], "{separator:?}");
        assert_eq!(
            intake.columns.iter().map(|column| column.thousands).collect::<Vec<_>>(),
            vec![separator.chars().next(); 2]
        );
        assert_eq!(intake.columns.iter().map(|column| column.decimal).collect::<Vec<_>>(), [Some(Decimal::Comma); 2]);
    }
    let point = read("reference\tindication\n1,234.50\t1,235.5\n-1,000,000.25\t\u{2212}1,000,001\n");
    assert_eq!(pairs(&point), [single(1234.5, 1235.5), single(-1_000_000.25, -1_000_001.0)]);
}

#[test]
fn the_decimal_mark_is_recognised_column_by_column() {
    let intake = read("reference;indication;temperature\n150,5;151.5;14\n400,5;402.5;15\n");
    assert_eq!(pairs(&intake), [single(150.5, 151.5), single(400.5, 402.5)]);
    assert_eq!(
        intake.columns.iter().map(|column| column.decimal).collect::<Vec<_>>(),
        [Some(Decimal::Comma), Some(Decimal::Point), None]
    );
}

#[test]
fn an_ambiguous_column_is_asked_about_and_gives_no_points_until_answered() {
    let text = "reference;indication\n1,234;1,5\n2,500;2,5\n12,000;12,1\n";
    let asked = read(text);
    assert_eq!(asked.points, []);
    assert_eq!(question_codes(&asked), ["decimal"]);
    assert_eq!(asked.questions[0].column, Some(0));
    assert_eq!(asked.questions[0].sentence, "Column \"reference\": is \"1,234\" 1234 or 1.234?");
    assert_eq!(asked.rows, [["1,234", "1,5"], ["2,500", "2,5"], ["12,000", "12,1"]]);
    let answers: Vec<_> =
        asked.questions[0].choices.iter().map(|choice| pairs(&read_text(text, &choice.option))).collect();
    assert_eq!(answers[0], [single(1234.0, 1.5), single(2500.0, 2.5), single(12000.0, 12.1)]);
    assert_eq!(answers[1], [single(1.234, 1.5), single(2.5, 2.5), single(12.0, 12.1)]);
}

#[test]
fn two_ambiguous_columns_are_answered_one_after_the_other() {
    let text = "reference\tindication\n1.234\t1.240\n2.500\t2.510\n";
    let first = read(text);
    assert_eq!(question_codes(&first), ["decimal", "decimal"]);
    let second = read_text(text, &first.questions[0].choices[0].option);
    assert_eq!((question_codes(&second), second.points.len()), (vec!["decimal"], 0));
    let done = read_text(text, &second.questions[0].choices[0].option);
    assert_eq!(pairs(&done), [single(1.234, 1.24), single(2.5, 2.51)]);
}

#[test]
fn context_decides_without_asking() {
    // A zero in front, a different number of decimals, two separators, an exponent: each leaves one reading only.
    for (cells, value) in [
        ("0,500\n1,234", 1.234),
        ("0.500\n1.234", 1.234),
        ("1,5\n1,234", 1.234),
        ("1.5\n1,234", 1234.0),
        ("1,234,567\n1,234", 1234.0),
        ("1.5e3\n1.234", 1.234),
    ] {
        let rows: String = cells.split('\n').map(|cell| format!("{cell};1\n")).collect();
        let intake = read(&format!("reference;indication\n{rows}"));
        assert_eq!(intake.points.last().and_then(|point| point.reference), Some(value), "{cells:?}");
    }
    // Where commas separate the cells, a point in a bare cell is the decimal point, and a note says so.
    let commas = read("reference,indication\n1.234,1.240\n2.500,2.510\n");
    assert_eq!(pairs(&commas), [single(1.234, 1.24), single(2.5, 2.51)]);
    assert_eq!(codes(&commas), ["decimal_point_by_delimiter"; 2]);
}

#[test]
fn a_column_that_mixes_both_marks_refuses_what_does_not_fit() {
    let intake = read("reference;indication\n1,5;1\n2,5;2\n3.5;3\n4,500;4\n");
    assert_eq!(pairs(&intake), [single(1.5, 1.0), single(2.5, 2.0), (None, vec![3.0]), (None, vec![4.0])]);
    assert_eq!(codes(&intake), ["cell_other_decimal", "cell_ambiguous"]);
    assert_eq!(intake.points[2].typed.reference.as_deref(), Some("3.5"));
    assert_eq!(question_codes(&read("reference;indication\n1,5;1\n2.5;2\n")), ["decimal"]);
}

#[test]
fn what_cannot_be_read_is_listed_and_the_rest_is_kept() {
    let bad = [
        ("NaN", "cell_not_a_number"),
        ("inf", "cell_infinite"),
        ("1e400", "cell_too_large"),
        ("12,3,4", "cell_malformed"),
        ("—", "cell_no_value"),
        ("n/a", "cell_no_value"),
        ("#REF!", "cell_spreadsheet_error"),
        ("dry", "cell_text"),
        ("15 cm", "cell_other_unit"),
    ];
    let rows: String = bad.iter().map(|(text, _)| format!("400;{text}\n")).collect();
    let intake = read(&format!("level / mm;indication / mm\n150;151,5\n\n{rows}"));
    assert_eq!(
        (question_codes(&intake), intake.points.len()),
        (vec!["reference"], 0),
        "a column without a known name is asked about"
    );
    let intake = read(&format!("reference / mm;indication / mm\n150;151,5\n\n{rows}"));
    assert_eq!(codes(&intake), bad.map(|(_, code)| code));
    assert_eq!(intake.points.len(), 1 + bad.len());
    for (index, (text, _)) in bad.iter().enumerate() {
        let (point, problem) = (&intake.points[index + 1], &intake.problems[index]);
        assert_eq!((point.reference, &point.indication), (Some(400.0), &None));
        assert_eq!(point.typed.indication, Some(OneOrMany::One((*text).to_owned())));
        let place = format!("row {}, column \"indication\"", index + 4);
        assert_eq!(problem.place, place);
        assert!(problem.sentence.starts_with(&format!("R{}: \"{text}\" ", &place[1..])), "{}", problem.sentence);
    }
    assert_eq!(
        intake.problems[4].sentence,
        "Row 8, column \"indication\": \"—\" says that there is no value; type the number, or leave the cell empty."
    );
}

#[test]
fn rows_of_other_lengths() {
    let intake =
        read("reference;indication\n150;151\n400\n650;652;\n900;902;wet\n1;150;151\n;1200\nend of list\n1400;1402\n");
    assert_eq!(
        pairs(&intake),
        [
            single(150.0, 151.0),
            (Some(400.0), vec![]),
            single(650.0, 652.0),
            single(900.0, 902.0),
            (None, vec![1200.0]),
            (None, vec![]),
            single(1400.0, 1402.0)
        ]
    );
    assert_eq!(codes(&intake), ["cell_empty", "row_too_long", "row_too_long", "cell_text", "cell_empty"]);
    assert_eq!(intake.problems[2].place, "row 6");
}

#[test]
fn decimal_commas_in_a_file_with_commas_are_not_taken_apart_silently() {
    let intake = read("reference,indication\n150,0,151,5\n400,0,402,5\n");
    assert_eq!(intake.points, []);
    assert_eq!(codes(&intake), ["row_too_long", "row_too_long"]);
    assert!(intake.problems[0].sentence.contains("semicolons"), "{}", intake.problems[0].sentence);
}

#[test]
fn columns_are_matched_by_name() {
    let text = "No.;time;set point [mm];reading 1 [mm];reading 2 [mm];mean reading [mm];ambient temperature (°C);approach;u(reference);error;remarks\n\
                1;09:10;150,0;151;150;150,5;14,2;up;0,2;0,5;first\n\
                2;09:20;400,0;402;;402,0;14,3;falling;0,2;2,0;\n";
    let options = Options { influence_names: vec!["temperature".to_owned()], ..Options::default() };
    let intake = read_text(text, &options);
    assert_eq!(pairs(&intake), [(Some(150.0), vec![151.0, 150.0]), (Some(400.0), vec![402.0])]);
    let roles: Vec<Option<Role>> = intake.columns.iter().map(|column| column.role.clone()).collect();
    let influence = Role::Influence("temperature".to_owned());
    let expected = [
        None,
        Some(Role::Time),
        Some(Role::Reference),
        Some(Role::Indication),
        Some(Role::Indication),
        None,
        Some(influence),
        Some(Role::Approach),
        Some(Role::ReferenceUncertainty),
        None,
        Some(Role::Note),
    ];
    assert_eq!(roles, expected);
    let json = serde_json::to_value(&intake.points[0]).expect("JSON");
    assert_eq!(
        json,
        serde_json::json!({
            "reference": 150.0, "indication": [151.0, 150.0], "reference_uncertainty": 0.2,
            "influences": { "temperature": 14.2 }, "approach": "up", "time": "09:10", "note": "first",
            "typed": { "reference": "150,0", "indication": ["151", "150"], "others": { "reference_uncertainty": "0,2" },
                       "influences": { "temperature": "14,2" } }
        })
    );
    let unused = intake.problems.iter().find(|problem| problem.code == "columns_unused").expect("a note");
    assert_eq!(unused.sentence, "Not taken: column \"No.\", column \"mean reading\" and column \"error\".");
}

#[test]
fn states_and_directions_in_headings_make_points_of_their_own() {
    let intake = read("reference;as found;as left\n150;155;151\n400;406;\n");
    let json = serde_json::to_value(&intake.points).expect("JSON");
    assert_eq!(json[0]["state"], "as_found");
    assert_eq!((&json[1]["state"], &json[1]["indication"]), (&serde_json::json!("as_left"), &serde_json::json!(151.0)));
    assert_eq!(intake.points.len(), 3);
    let swept = read("input / %;output up / mA;output down / mA\n0;4,01;4,03\n50;12,00;12,05\n");
    let json = serde_json::to_value(&swept.points).expect("JSON");
    assert_eq!((&json[0]["approach"], &json[1]["approach"]), (&serde_json::json!("up"), &serde_json::json!("down")));
    assert_eq!(pairs(&swept), [single(0.0, 4.01), single(0.0, 4.03), single(50.0, 12.0), single(50.0, 12.05)]);
    assert_eq!(swept.columns[1].unit.as_deref(), Some("mA"));
}

#[test]
fn two_columns_without_names_are_reference_and_indication_and_a_note_says_so() {
    let intake = read("150\t151\n400\t402\n");
    assert_eq!((intake.header, pairs(&intake)), (false, vec![single(150.0, 151.0), single(400.0, 402.0)]));
    assert_eq!(codes(&intake), ["columns_in_order"]);
}

#[test]
fn what_names_do_not_tell_is_asked() {
    let text = "A;B\n150;151\n400;402\n";
    let asked = read(text);
    assert_eq!((question_codes(&asked), asked.points.len()), (vec!["roles"], 0));
    let swapped = read_text(text, &asked.questions[0].choices[1].option);
    assert_eq!(pairs(&swapped), [single(151.0, 150.0), single(402.0, 400.0)]);

    let text = "1\t150\t151\t152\n2\t400\t402\t401\n";
    let first = read(text);
    assert_eq!(question_codes(&first), ["reference"]);
    let second = read_text(text, &first.questions[0].choices[1].option);
    assert_eq!(question_codes(&second), ["indication"]);
    let labels: Vec<&str> = second.questions[0].choices.iter().map(|choice| choice.label.as_str()).collect();
    assert_eq!(
        labels,
        ["Column 1", "Column 3", "Column 4", "Column 1, column 3 and column 4 are repeats of one indication"]
    );

    let text = "reference;1;2\n10;10,1;10,2\n20;20,1;20,2\n";
    let counted = read(text);
    let repeats = counted.questions[0].choices.last().expect("a choice");
    assert_eq!(repeats.label, "Column \"1\" and column \"2\" are repeats of one indication");
    assert_eq!(
        pairs(&read_text(text, &repeats.option)),
        [(Some(10.0), vec![10.1, 10.2]), (Some(20.0), vec![20.1, 20.2])]
    );

    assert_eq!(question_codes(&read("reference;output;display\n1;4,0;1,0\n2;5,0;2,0\n")), ["indication"]);
    assert_eq!(question_codes(&read("150\n400\n")), ["roles"]);
    assert_eq!(question_codes(&read("1,5\n2,5\n")), ["delimiter"]);
}

#[test]
fn options_name_columns_by_name_and_by_number() {
    let text = "A;B;C [mm]\n1;150;151\n2;400;402\n";
    let expected = [single(150.0, 151.0), single(400.0, 402.0)];
    for (reference, indication) in [
        (ColumnKey::Index(1), ColumnKey::Index(2)),
        (ColumnKey::Name("b".into()), ColumnKey::Name("C".into())),
        (ColumnKey::Name("2".into()), ColumnKey::Name("C [mm]".into())),
    ] {
        let columns = ColumnOptions {
            reference: Some(reference),
            indication: Some(ColumnKeys::One(indication)),
            ..ColumnOptions::default()
        };
        let intake = read_text(text, &Options { columns, ..Options::default() });
        assert_eq!(pairs(&intake), expected);
    }
    let json = r#"{ "columns": { "reference": "B", "indication": ["C", 0], "influences": ["A"] }, "decimals": [{ "column": "B", "decimal": "comma" }], "delimiter": "semicolon", "header": true }"#;
    let options: Options = serde_json::from_str(json).expect("options");
    assert_eq!(codes(&read_text(text, &options)), ["column_two_roles"]);
    let missing: Options =
        serde_json::from_str(r#"{ "columns": { "reference": "D", "indication": "C" } }"#).expect("options");
    let intake = read_text(text, &missing);
    assert_eq!(
        intake.problems[0].sentence,
        "There is no column \"D\"; there are column \"A\", column \"B\" and column \"C\"."
    );
    let influences: Options =
        serde_json::from_str(r#"{ "columns": { "reference": 1, "indication": 2, "influences": { "t": "A" } } }"#)
            .expect("options");
    assert_eq!(read_text(text, &influences).points[1].influences["t"], 2.0);
}

#[test]
fn the_options_of_a_choice_come_back_from_json() {
    let text = "reference;indication\n1,234;1,240\n2,500;2,510\n";
    for question in read(text).questions {
        for choice in question.choices {
            let json = serde_json::to_string(&choice.option).expect("JSON");
            assert_eq!(serde_json::from_str::<Options>(&json).expect("options"), choice.option);
        }
    }
}

#[test]
fn files_in_every_encoding() {
    let text = "Füllhöhe Sollwert / µm;Anzeige / µm\r\n1’234,5;1’235,0\r\n–5,0;−4,5\r\n";
    let little: Vec<u8> = text.encode_utf16().flat_map(u16::to_le_bytes).collect();
    let big: Vec<u8> = text.encode_utf16().flat_map(u16::to_be_bytes).collect();
    let latin = "Füllhöhe Sollwert / µm;Anzeige / µm\r\n1'234,5;1'235,0\r\n-5,0;-4,5\r\n";
    let latin: Vec<u8> = latin.chars().map(|character| character as u8).collect();
    let files = [
        (text.as_bytes().to_vec(), Encoding::Utf8),
        ([b"\xEF\xBB\xBF", text.as_bytes()].concat(), Encoding::Utf8),
        ([b"\xFF\xFE", &little[..]].concat(), Encoding::Utf16Le),
        ([b"\xFE\xFF", &big[..]].concat(), Encoding::Utf16Be),
        (little, Encoding::Utf16Le),
        (big, Encoding::Utf16Be),
        (latin, Encoding::Windows1252),
    ];
    for (bytes, encoding) in files {
        let intake = read_bytes(&bytes, &Options::default());
        assert_eq!(intake.encoding, encoding);
        assert_eq!(pairs(&intake), [single(1234.5, 1235.0), single(-5.0, -4.5)], "{encoding:?}");
        assert_eq!(intake.columns[0].unit.as_deref(), Some("µm"));
        assert_eq!(intake.delimiter, Some(Delimiter::Semicolon));
    }
}

#[test]
fn too_much_is_refused_with_the_cap() {
    let row = "1;2\n";
    let full = read(&format!("reference;indication\n{}", row.repeat(100_000)));
    assert_eq!((full.points.len(), full.problems.len()), (100_000, 0));
    for rows in [100_001, 200_000] {
        let over = read(&format!("reference;indication\n{}", row.repeat(rows)));
        assert_eq!((over.points.len(), codes(&over)), (0, vec!["too_many_rows"]));
        assert!(over.problems[0].sentence.contains("at most 100000"), "{}", over.problems[0].sentence);
        assert_eq!(over.rows.len(), 200);
    }
    let repeats = read(&format!("reference;indication 1;indication 2\n{}", "1;2;3\n".repeat(60_000)));
    assert_eq!((repeats.points.len(), codes(&repeats)), (0, vec!["too_many_rows"]));
    let large = read_bytes(&vec![b'1'; 64 * 1024 * 1024 + 1], &Options::default());
    assert_eq!((codes(&large), large.problems[0].sentence.contains("at most 64 MB")), (vec!["too_large"], true));
}

#[test]
fn nothing_to_read() {
    for (text, code) in [
        ("", "nothing"),
        (" \r\n\t\n", "nothing"),
        ("reference;indication\n", "no_rows"),
        ("just a line of words", "no_numbers"),
    ] {
        let intake = read(text);
        assert!(codes(&intake).contains(&code) && intake.points.is_empty(), "{text:?} {:?}", intake.problems);
    }
    let many = read(&format!("reference;indication\n{}", "1;x\n".repeat(2000)));
    assert_eq!((many.points.len(), many.problems.len()), (2000, 1001));
    assert_eq!(many.problems[1000].sentence, "1000 more cells or rows have problems that are not listed here.");
}

#[test]
fn one_huge_cell_or_row_does_no_harm() {
    let note = "bubbles, again; ".repeat(70_000);
    let intake = read(&format!("reference;indication;note\n150;151;\"{note}\"\n400;402;\n"));
    assert_eq!(
        (pairs(&intake), intake.points[0].note.len()),
        (vec![single(150.0, 151.0), single(400.0, 402.0)], note.trim().len())
    );
    let digits = read(&format!("reference;indication\n150;{}\n", "9".repeat(1_000_000)));
    assert_eq!(codes(&digits), ["cell_too_long"]);
    for separator in [" ", ",", ";", "\t"] {
        assert_eq!(codes(&read(&format!("1{separator}").repeat(100_000))), ["too_many_columns"], "{separator:?}");
    }
    let blank = read(&format!("{}150;151.5", "\n".repeat(5_000_000)));
    assert_eq!(pairs(&blank), [single(150.0, 151.5)]);
}

#[test]
fn the_shape_of_the_answer() {
    let json = serde_json::to_value(read("reference / mm;indication / mm\n150;151,0\n")).expect("JSON");
    assert_eq!(
        json,
        serde_json::json!({
            "encoding": "text", "delimiter": "semicolon", "header": true,
            "columns": [
                { "index": 0, "name": "reference", "unit": "mm", "decimal": null, "thousands": null, "role": "reference",
                  "state": null, "approach": null, "numbers": 1 },
                { "index": 1, "name": "indication", "unit": "mm", "decimal": "comma", "thousands": null, "role": "indication",
                  "state": null, "approach": null, "numbers": 1 }
            ],
            "rows": [["150", "151,0"]], "row_count": 1,
            "points": [{ "reference": 150.0, "indication": 151.0, "typed": { "reference": "150", "indication": "151,0" } }],
            "problems": [], "questions": []
        })
    );
}
