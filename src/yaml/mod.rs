//! A YAML mapping with the place of every key and value.
