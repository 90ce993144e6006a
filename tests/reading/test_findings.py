"""Findings: one line for people, one record for machines, one order, every one counted."""

import json

from builder.read.findings import Finding, Place, in_order, quoted, report_text


def finding(line=14, column=11, code="read-tab", level="error", file="salts/x.yaml", found="a tab"):
    return Finding(level, code, Place(file, line, column), found, "use spaces")


def test_the_line_for_people():
    assert str(finding()) == "salts/x.yaml:14:11: error read-tab: found a tab; use spaces"


def test_hostile_facts_stay_on_one_line_and_act_on_no_terminal():
    hostile = "a\nb\r\x1b[31m\u2028\u202e"
    line = str(finding(found=hostile, file="x\n.yaml"))
    assert line.isprintable()
    assert "a\\u000ab\\u000d\\u001b[31m\\u2028\\u202e" in line
    assert line.startswith("x\\u000a.yaml:14:11: ")


def test_the_record_for_machines_survives_json():
    assert json.loads(json.dumps(finding(found="\n").as_json())) == {
        "level": "error",
        "code": "read-tab",
        "file": "salts/x.yaml",
        "line": 14,
        "column": 11,
        "found": "\n",
        "cure": "use spaces",
    }


def test_long_values_are_shortened_to_120_characters():
    assert quoted("x" * 120) == "'" + "x" * 120 + "'"
    assert quoted("x" * 121) == "'" + "x" * 119 + "…'"
    assert quoted("a\tb") == "'a\\u0009b'"


def test_order_is_file_line_column_code_found():
    sorted_by_hand = [
        finding(file="a.yaml", line=9),
        finding(file="b.yaml", line=2, column=9),
        finding(file="b.yaml", line=10, column=1, code="a-b"),
        finding(file="b.yaml", line=10, column=1, code="b-a", found="first"),
        finding(file="b.yaml", line=10, column=1, code="b-a", found="second"),
        finding(file="b.yaml", line=10, column=2, code="a-a"),
    ]
    assert in_order(sorted_by_hand[::-1]) == sorted_by_hand
    assert in_order(sorted_by_hand[3:] + sorted_by_hand[:3]) == sorted_by_hand


def test_the_report_prints_some_and_counts_all():
    many = [finding(line=n, level="error" if n < 5 else "doubt") for n in range(1, 8)]
    report = report_text([*many, finding(file="a.yaml", level="note")], most_per_file=3)
    assert report.splitlines() == [
        "a.yaml:14:11: note read-tab: found a tab; use spaces",
        *(f"salts/x.yaml:{n}:11: error read-tab: found a tab; use spaces" for n in (1, 2, 3)),
        "salts/x.yaml: 1 error, 3 doubts, 0 notes more, not shown",
        "4 errors, 3 doubts, 1 note in 2 files",
    ]


def test_a_report_without_findings_says_so():
    assert report_text([]) == "0 errors, 0 doubts, 0 notes in 0 files\n"


def test_a_full_file_is_printed_without_a_remark():
    assert "not shown" not in report_text([finding(line=n) for n in range(50)])
    assert "1 error, 0 doubts, 0 notes more" in report_text([finding(line=n) for n in range(51)])
