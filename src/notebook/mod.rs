//! The folder: settings, own constants, pages, attachments, safe replacement of a file.
