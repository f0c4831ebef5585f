//! Published limits and worked values, each with its source.

use super::*;

/// One reading with a perfect instrument at a place, and what a rule says of it.
fn verdict_of(rule: &str, system: &str, at: &str, quantity: &str, volts: f64, book: &str) -> Option<(Verdict, String)> {
    let text = format!(
        "system = \"{system}\"\ninstruments = [{{ name = \"M\", percent = 0, counts = 0 }}]\n\
         runs = [{{ name = \"SVC\", legs = \"L1 L2\" }}, {{ name = \"1\", from = \"SVC\", legs = \"L1 L2\" }}]\n\
         readings = [{{ at = \"{at}\", V = {{ {quantity} = {volts:?} }} }}]\n"
    );
    let mut fixture = Fixture::read(&text);
    fixture.book = book.to_owned();
    findings(&fixture).into_iter().find(|f| f.rule == rule).map(|f| (f.verdict, f.basis))
}

/// `A`, `B only`, `outside B` of the two-range rules.
fn range_of(rule: &str, system: &str, at: &str, quantity: &str, volts: f64, book: &str) -> String {
    match verdict_of(rule, system, at, quantity, volts, book) {
        None => "no limit".to_owned(),
        Some((Verdict::Pass, _)) => "A".to_owned(),
        Some((_, basis)) if basis.contains("Range B") || basis.contains("extreme") || basis.contains("all ten") => "outside B".to_owned(),
        Some(_) => "B only".to_owned(),
    }
}

/// ANSI C84.1, Table 1, service voltages (114 to 126 and 110 to 127 on the 120 V base; California PUC decision 12993, finding 8;
/// COMAR 20.50.07.02 for the upper limits). Limits are allowed values.
#[test]
fn service_limits_of_c84_1_at_their_edges() {
    for (system, quantity, volts, range) in [
        ("120/240", "L1-N", 114.0, "A"),
        ("120/240", "L1-N", 113.9, "B only"),
        ("120/240", "L1-N", 110.0, "B only"),
        ("120/240", "L1-N", 109.9, "outside B"),
        ("120/240", "L1-N", 126.0, "A"),
        ("120/240", "L1-N", 126.1, "B only"),
        ("120/240", "L1-N", 127.0, "B only"),
        ("120/240", "L1-N", 127.1, "outside B"),
        ("120/240", "L1-L2", 228.0, "A"),
        ("120/240", "L1-L2", 227.9, "B only"),
        ("120/240", "L1-L2", 252.0, "A"),
        ("120/240", "L1-L2", 254.1, "outside B"),
        ("208Y/120", "L1-L2", 197.0, "A"),
        ("208Y/120", "L1-L2", 196.9, "B only"),
        ("208Y/120", "L1-L2", 218.0, "A"),
        ("208Y/120", "L1-L2", 218.1, "B only"),
        ("208Y/120", "L2-N", 114.0, "A"),
        ("120/208", "L1-L2", 190.9, "outside B"),
        ("240/120", "L1-L2", 228.0, "A"),
        ("240/120", "L2-N", 208.0, "no limit"),
        ("480Y/277", "L1-L2", 455.0, "B only"),
        ("480Y/277", "L1-L2", 439.0, "outside B"),
        ("480Y/277", "L1-L2", 456.0, "A"),
        ("480Y/277", "L1-L2", 504.0, "A"),
        ("480Y/277", "L1-N", 263.0, "A"),
        ("480Y/277", "L1-N", 292.0, "B only"),
    ] {
        assert_eq!(range_of("service-range", system, "SVC", quantity, volts, ""), range, "{volts} V {quantity} on {system}");
    }
}
