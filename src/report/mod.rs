//! Answer to Markdown, SVG and JSON.
