//! A Markdown page as bytes: finding fences and results, splicing.
