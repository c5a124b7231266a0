//! A fingerprint of an answer, the same wherever the same bits were computed.
//!
//! The page's tests compute it from the answer as JavaScript has it (tests/browser/support/hash.ts); therefore
//! numbers count as doubles, what is not finite or absent as null, and keys in the order of their names.

use serde_json::{Value, json};
use widthwise_core::error::Refusal;
use widthwise_sheet::requests::Reply;

/// FNV-1a, 32 bit, twice with different beginnings.
struct Print(u32, u32);

impl Print {
    fn byte(&mut self, byte: u8) {
        self.0 = (self.0 ^ u32::from(byte)).wrapping_mul(0x0100_0193);
        self.1 = (self.1 ^ u32::from(byte ^ 0x5a)).wrapping_mul(0x0100_0193);
    }

    fn bytes(&mut self, kind: u8, bytes: &[u8]) {
        self.byte(kind);
        for byte in bytes {
            self.byte(*byte);
        }
    }

    fn number(&mut self, number: f64) {
        if number.is_finite() {
            self.bytes(b'n', &number.to_bits().to_le_bytes());
        } else {
            self.byte(b'0');
        }
    }

    fn value(&mut self, value: &Value) {
        match value {
            Value::Null => self.byte(b'0'),
            Value::Bool(flag) => self.byte(if *flag { b't' } else { b'f' }),
            Value::Number(number) => self.number(number.as_f64().unwrap_or(f64::NAN)),
            Value::String(text) => {
                self.bytes(b's', text.as_bytes());
                self.byte(b'.');
            }
            Value::Array(list) => {
                self.byte(b'[');
                list.iter().for_each(|one| self.value(one));
                self.byte(b']');
            }
            Value::Object(map) => {
                self.byte(b'{');
                // JSON has no NaN: it is null, and what is null counts as absent.
                let mut entries: Vec<_> =
                    map.iter().filter(|(_, inner)| !inner.is_null()).collect();
                entries.sort_by_key(|(key, _)| *key);
                for (key, inner) in entries {
                    self.bytes(b'k', key.as_bytes());
                    self.value(inner);
                }
                self.byte(b'}');
            }
        }
    }
}

/// The fingerprint of an answer or refusal.
#[must_use]
pub fn of_answer(answer: &Result<Reply, Refusal>) -> String {
    let mut print = Print(0x811c_9dc5, 0x1234_5678);
    match answer {
        Ok(reply) => {
            print.value(&json!(reply.body));
            for column in &reply.columns {
                print.value(&json!([column.name, column.unit]));
                column.values.iter().for_each(|v| print.number(*v));
            }
        }
        Err(refusal) => print.value(&json!(refusal)),
    }
    format!("{:08x}{:08x}", print.0, print.1)
}
