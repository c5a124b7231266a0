//! Propagators Delta(s): one file a form.
