//! Checks a record against its schema: the few keywords that the schemas use.
//!
//! `type`, `const`, `enum`, `required`, `properties`, `additionalProperties` (a schema),
//! `items`, `anyOf`, `minimum` and `$ref` to `#/$defs/NAME`.

#![allow(
    clippy::unwrap_used,
    clippy::panic,
    reason = "what serves tests only may stop them"
)]

use serde_json::Value;
use std::path::Path;

/// Fails with everything in a record that does not fit the schema of that file name.
pub fn check(schema: &str, record: &str) {
    let faults = faults(schema, record);
    assert!(faults.is_empty(), "{schema}:\n{}", faults.join("\n"));
}

/// Everything in a record that does not fit.
pub fn faults(schema: &str, record: &str) -> Vec<String> {
    let path = Path::new(env!("CARGO_MANIFEST_DIR"))
        .join("../report/schema")
        .join(schema);
    let root: Value = serde_json::from_str(&std::fs::read_to_string(path).unwrap()).unwrap();
    let mut faults = Vec::new();
    fits(
        &root,
        &root,
        &serde_json::from_str(record).unwrap(),
        "$",
        &mut faults,
    );
    faults
}

fn fits(root: &Value, schema: &Value, value: &Value, at: &str, faults: &mut Vec<String>) {
    for (keyword, rule) in schema.as_object().unwrap() {
        let sound = match keyword.as_str() {
            "$ref" => {
                let name = rule.as_str().unwrap().strip_prefix("#/$defs/").unwrap();
                fits(root, &root["$defs"][name], value, at, faults);
                true
            }
            "type" => types(rule).iter().any(|t| is(t, value)),
            "const" => rule == value,
            "enum" => rule.as_array().unwrap().contains(value),
            "minimum" => value.as_f64().is_none_or(|x| x >= rule.as_f64().unwrap()),
            "required" => types(rule).iter().all(|key| value.get(key).is_some()),
            "anyOf" => rule.as_array().unwrap().iter().any(|one| {
                let mut own = Vec::new();
                fits(root, one, value, at, &mut own);
                own.is_empty()
            }),
            "properties" => {
                for (key, one) in rule.as_object().unwrap() {
                    if let Some(inner) = value.get(key) {
                        fits(root, one, inner, &format!("{at}.{key}"), faults);
                    }
                }
                true
            }
            "additionalProperties" => {
                for (key, inner) in value.as_object().into_iter().flatten() {
                    fits(root, rule, inner, &format!("{at}.{key}"), faults);
                }
                true
            }
            "items" => {
                for (k, inner) in value.as_array().into_iter().flatten().enumerate() {
                    fits(root, rule, inner, &format!("{at}[{k}]"), faults);
                }
                true
            }
            "$schema" | "$id" | "$defs" | "title" | "description" => true,
            other => panic!("the checker does not know `{other}`"),
        };
        if !sound {
            faults.push(format!("{at}: {value} does not fit {keyword} {rule}"));
        }
    }
}

/// One word or several.
fn types(rule: &Value) -> Vec<&str> {
    rule.as_array().map_or_else(
        || rule.as_str().into_iter().collect(),
        |all| all.iter().filter_map(Value::as_str).collect(),
    )
}

fn is(kind: &str, value: &Value) -> bool {
    match kind {
        "null" => value.is_null(),
        "string" => value.is_string(),
        "number" => value.is_number(),
        "integer" => value.is_u64() || value.is_i64(),
        "boolean" => value.is_boolean(),
        "array" => value.is_array(),
        "object" => value.is_object(),
        other => panic!("no such type: {other}"),
    }
}
