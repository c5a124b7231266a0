//! Plain JSON as one of our types, on one road for files and requests; where it does not fit, the path.
//!
//! The path is kept by the reader of the JSON, not by a wrapper around the visitor of every type:
//! such a wrapper doubles the code of every type, a fifth of the whole engine.

use serde::de::value::StringDeserializer;
use serde::de::{
    DeserializeOwned, DeserializeSeed, Deserializer, EnumAccess, Error as _, IntoDeserializer,
    MapAccess, SeqAccess, Unexpected, VariantAccess, Visitor,
};
use serde_json::{Error, Map, Value};
use std::cell::RefCell;
use std::fmt::Write as _;

/// Reads a value; where it does not fit, the path (`rows[3].counts`) and the reason.
pub fn typed<T: DeserializeOwned>(value: Value) -> Result<T, (String, String)> {
    let path = RefCell::new(Vec::new());
    let node = Node { value, path: &path };
    T::deserialize(node).map_err(|error| (written(&path.borrow()), error.to_string()))
}

/// One step of the path.
enum Step {
    Field(String),
    Place(usize),
}

fn written(path: &[Step]) -> String {
    let mut text = String::new();
    for step in path {
        match step {
            Step::Field(name) if text.is_empty() => text.push_str(name),
            Step::Field(name) => {
                text.push('.');
                text.push_str(name);
            }
            Step::Place(place) => {
                let _ = write!(text, "[{place}]");
            }
        }
    }
    text
}

/// A value and the way to it. A step stays on the path when what lies behind it is refused.
struct Node<'p> {
    value: Value,
    path: &'p RefCell<Vec<Step>>,
}

impl Node<'_> {
    fn below<'de, S: DeserializeSeed<'de>>(self, step: Step, seed: S) -> Result<S::Value, Error> {
        let path = self.path;
        path.borrow_mut().push(step);
        let read = seed.deserialize(self)?;
        path.borrow_mut().pop();
        Ok(read)
    }
}

impl<'de> Deserializer<'de> for Node<'_> {
    type Error = Error;

    fn deserialize_any<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Error> {
        let path = self.path;
        match self.value {
            Value::Null => visitor.visit_unit(),
            Value::Bool(value) => visitor.visit_bool(value),
            Value::String(value) => visitor.visit_string(value),
            Value::Number(number) => match (number.as_u64(), number.as_i64(), number.as_f64()) {
                (Some(value), ..) => visitor.visit_u64(value),
                (_, Some(value), _) => visitor.visit_i64(value),
                (.., value) => visitor.visit_f64(value.unwrap_or(f64::NAN)),
            },
            Value::Array(list) => in_order(list, path, visitor),
            Value::Object(fields) => by_name(fields, path, visitor),
        }
    }

    // What is asked for as a record is a record: a list in its place is refused, which also spares
    // the engine a second reader of every type.
    fn deserialize_struct<V: Visitor<'de>>(
        self,
        _name: &'static str,
        _fields: &'static [&'static str],
        visitor: V,
    ) -> Result<V::Value, Error> {
        self.deserialize_map(visitor)
    }

    fn deserialize_map<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Error> {
        let path = self.path;
        match self.value {
            Value::Object(fields) => by_name(fields, path, visitor),
            other => Err(Error::invalid_type(kind(&other), &visitor)),
        }
    }

    fn deserialize_seq<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Error> {
        let path = self.path;
        match self.value {
            Value::Array(list) => in_order(list, path, visitor),
            other => Err(Error::invalid_type(kind(&other), &visitor)),
        }
    }

    fn deserialize_tuple<V: Visitor<'de>>(
        self,
        _len: usize,
        visitor: V,
    ) -> Result<V::Value, Error> {
        self.deserialize_seq(visitor)
    }

    fn deserialize_option<V: Visitor<'de>>(self, visitor: V) -> Result<V::Value, Error> {
        match self.value {
            Value::Null => visitor.visit_none(),
            _ => visitor.visit_some(self),
        }
    }

    fn deserialize_newtype_struct<V: Visitor<'de>>(
        self,
        _name: &'static str,
        visitor: V,
    ) -> Result<V::Value, Error> {
        visitor.visit_newtype_struct(self)
    }

    fn deserialize_enum<V: Visitor<'de>>(
        self,
        _name: &'static str,
        _variants: &'static [&'static str],
        visitor: V,
    ) -> Result<V::Value, Error> {
        let path = self.path;
        let (variant, value) = match self.value {
            Value::String(variant) => (variant, None),
            Value::Object(fields) if fields.len() == 1 => match fields.into_iter().next() {
                Some((variant, value)) => (variant, Some(value)),
                None => (String::new(), None),
            },
            other => {
                return Err(Error::invalid_type(
                    kind(&other),
                    &"one of the names allowed",
                ));
            }
        };
        visitor.visit_enum(Choice {
            variant,
            value,
            path,
        })
    }

    serde::forward_to_deserialize_any! {
        bool i8 i16 i32 i64 i128 u8 u16 u32 u64 u128 f32 f64 char str string bytes byte_buf unit
        unit_struct tuple_struct identifier ignored_any
    }
}

fn in_order<'de, V: Visitor<'de>>(
    list: Vec<Value>,
    path: &RefCell<Vec<Step>>,
    visitor: V,
) -> Result<V::Value, Error> {
    let length = list.len();
    let mut rest = Places {
        list: list.into_iter(),
        next: 0,
        path,
    };
    let read = visitor.visit_seq(&mut rest)?;
    if rest.list.len() > 0 {
        return Err(Error::invalid_length(length, &"fewer values"));
    }
    Ok(read)
}

fn by_name<'de, V: Visitor<'de>>(
    fields: Map<String, Value>,
    path: &RefCell<Vec<Step>>,
    visitor: V,
) -> Result<V::Value, Error> {
    visitor.visit_map(Fields {
        fields: fields.into_iter(),
        value: None,
        path,
    })
}

fn kind(value: &Value) -> Unexpected<'_> {
    match value {
        Value::Null => Unexpected::Unit,
        Value::Bool(value) => Unexpected::Bool(*value),
        Value::Number(number) => Unexpected::Float(number.as_f64().unwrap_or(f64::NAN)),
        Value::String(text) => Unexpected::Str(text),
        Value::Array(_) => Unexpected::Seq,
        Value::Object(_) => Unexpected::Map,
    }
}

struct Places<'p> {
    list: std::vec::IntoIter<Value>,
    next: usize,
    path: &'p RefCell<Vec<Step>>,
}

impl<'de> SeqAccess<'de> for &mut Places<'_> {
    type Error = Error;

    fn next_element_seed<S: DeserializeSeed<'de>>(
        &mut self,
        seed: S,
    ) -> Result<Option<S::Value>, Error> {
        let Some(value) = self.list.next() else {
            return Ok(None);
        };
        let step = Step::Place(self.next);
        self.next += 1;
        let path = self.path;
        Node { value, path }.below(step, seed).map(Some)
    }

    fn size_hint(&self) -> Option<usize> {
        Some(self.list.len())
    }
}

struct Fields<'p> {
    fields: serde_json::map::IntoIter,
    value: Option<(String, Value)>,
    path: &'p RefCell<Vec<Step>>,
}

impl<'de> MapAccess<'de> for Fields<'_> {
    type Error = Error;

    fn next_key_seed<S: DeserializeSeed<'de>>(
        &mut self,
        seed: S,
    ) -> Result<Option<S::Value>, Error> {
        let Some((name, value)) = self.fields.next() else {
            return Ok(None);
        };
        let key: StringDeserializer<Error> = name.clone().into_deserializer();
        self.value = Some((name, value));
        seed.deserialize(key).map(Some)
    }

    fn next_value_seed<S: DeserializeSeed<'de>>(&mut self, seed: S) -> Result<S::Value, Error> {
        let Some((name, value)) = self.value.take() else {
            return Err(Error::custom("a value without its name"));
        };
        let path = self.path;
        Node { value, path }.below(Step::Field(name), seed)
    }
}

struct Choice<'p> {
    variant: String,
    value: Option<Value>,
    path: &'p RefCell<Vec<Step>>,
}

impl<'de, 'p> EnumAccess<'de> for Choice<'p> {
    type Error = Error;
    type Variant = Content<'p>;

    fn variant_seed<S: DeserializeSeed<'de>>(
        self,
        seed: S,
    ) -> Result<(S::Value, Content<'p>), Error> {
        let variant: StringDeserializer<Error> = self.variant.into_deserializer();
        let content = Content {
            value: self.value,
            path: self.path,
        };
        Ok((seed.deserialize(variant)?, content))
    }
}

/// What belongs to the variant chosen.
struct Content<'p> {
    value: Option<Value>,
    path: &'p RefCell<Vec<Step>>,
}

impl<'p> Content<'p> {
    fn node(self) -> Node<'p> {
        Node {
            value: self.value.unwrap_or(Value::Object(Map::new())),
            path: self.path,
        }
    }
}

impl<'de> VariantAccess<'de> for Content<'_> {
    type Error = Error;

    fn unit_variant(self) -> Result<(), Error> {
        match self.value {
            None | Some(Value::Null) => Ok(()),
            Some(other) => Err(Error::invalid_type(kind(&other), &"nothing more")),
        }
    }

    fn newtype_variant_seed<S: DeserializeSeed<'de>>(self, seed: S) -> Result<S::Value, Error> {
        seed.deserialize(self.node())
    }

    fn tuple_variant<V: Visitor<'de>>(self, _len: usize, visitor: V) -> Result<V::Value, Error> {
        self.node().deserialize_seq(visitor)
    }

    fn struct_variant<V: Visitor<'de>>(
        self,
        _fields: &'static [&'static str],
        visitor: V,
    ) -> Result<V::Value, Error> {
        self.node().deserialize_map(visitor)
    }
}

#[cfg(test)]
mod tests {
    use super::typed;
    use serde::Deserialize;
    use serde_json::json;

    #[derive(Debug, PartialEq, Deserialize)]
    #[serde(rename_all = "snake_case")]
    enum Form {
        Flat,
        Line { slope: f64 },
        Pair(i8, i8),
        Named(String),
    }

    #[derive(Debug, PartialEq, Deserialize)]
    struct Thing {
        name: Option<String>,
        forms: Vec<Form>,
        pair: (f64, u32),
    }

    #[test]
    fn reads_what_the_ordinary_reader_reads() {
        for value in [
            json!({"name": null, "forms": ["flat", {"line": {"slope": 2}}], "pair": [-1.5, 7]}),
            json!({"name": "a", "forms": [{"pair": [-1, 2]}, {"named": "b"}], "pair": [3, 0]}),
            json!({"forms": [], "pair": [1e300, 4294967295_u32], "more": {"not": ["ours"]}}),
        ] {
            let ordinary: Thing = serde_json::from_value(value.clone()).unwrap();
            assert_eq!(typed::<Thing>(value), Ok(ordinary));
        }
    }

    #[test]
    fn says_where_it_does_not_fit() {
        for (value, path) in [
            (json!({"forms": [], "pair": [1, "x"]}), "pair[1]"),
            (json!({"forms": [], "pair": [1, 2, 3]}), "pair"),
            (
                json!({"forms": ["flat", {"line": {"slope": "x"}}], "pair": [1, 2]}),
                "forms[1].slope",
            ),
            (json!({"forms": ["round"], "pair": [1, 2]}), "forms[0]"),
            (json!({"forms": [{"flat": 1}], "pair": [1, 2]}), "forms[0]"),
            (json!({"forms": [3], "pair": [1, 2]}), "forms[0]"),
            (json!({"pair": [1, 2]}), ""),
            (json!("text"), ""),
            (json!([null, [], [1, 2]]), ""),
        ] {
            let (found, reason) = typed::<Thing>(value).unwrap_err();
            assert_eq!(found, path, "{reason}");
            assert!(!reason.is_empty());
        }
    }
}
