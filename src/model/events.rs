//! YAML's event stream, each event with the bytes that it came from.
//!
//! The parser inside `serde_yaml` is used directly, because no other agrees with it on odd documents and it alone gives
//! places on success. Nothing is interpreted here: no aliases, no types, no limits; `tree` does that. Start at
//! [`Events`], an iterator that ends after the stream's end or the first fault.
//!
//! # Why the unsafe code is sound
//!
//! - The parser's state lives in a box that is never moved out of or handed out, is initialised once in
//!   [`Events::new`], and is freed once in `drop`. Were initialisation to fail, nothing is kept and nothing is freed.
//! - The parser keeps a pointer to the text; `Events<'t>` borrows the text for as long as it lives.
//! - After a fault the parser must not be asked again; `over` sees to that.
//! - An event is read only after the parser said that it filled it, through the union field that its type names, copied
//!   into owned values and then deleted exactly once. Strings are read up to their length (scalars) or their terminating
//!   zero (anchors, tags, problems), which the parser guarantees; null means absent.

#![expect(unsafe_code, reason = "the parser is a translation from C; the module's head says why its use is sound")]

use std::ffi::CStr;
use std::marker::PhantomData;
use std::mem::MaybeUninit;

use unsafe_libyaml as unsafe_sys;

use crate::diag::Span;

/// How a scalar is written.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Style {
    Plain,
    SingleQuoted,
    DoubleQuoted,
    Literal,
    Folded,
}

/// What the parser met.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) enum What {
    DocumentStart,
    DocumentEnd,
    Alias(String),
    Scalar {
        value: String,
        style: Style,
    },
    SequenceStart {
        flow: bool,
    },
    SequenceEnd,
    MappingStart {
        flow: bool,
    },
    MappingEnd,
    /// Start and end of the stream.
    Stream,
}

/// One event.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Event {
    pub(super) what: What,
    pub(super) anchor: Option<String>,
    pub(super) tag: Option<String>,
    pub(super) span: Span,
}

/// Why the parser stopped, in its own words.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Fault {
    pub(super) problem: String,
    /// The byte where it noticed.
    pub(super) at: usize,
    /// The byte where what it was reading began.
    pub(super) began: usize,
}

/// The events of a text.
pub(super) struct Events<'t> {
    parser: Box<MaybeUninit<unsafe_sys::yaml_parser_t>>,
    over: bool,
    text: PhantomData<&'t str>,
}

impl<'t> Events<'t> {
    /// `None` where the parser cannot be set up.
    pub(super) fn new(text: &'t str) -> Option<Self> {
        let mut parser = Box::new(MaybeUninit::<unsafe_sys::yaml_parser_t>::uninit());
        let state = parser.as_mut_ptr();
        // SAFETY: `state` points to room for a parser; it is used further only where initialisation succeeded.
        unsafe {
            if unsafe_sys::yaml_parser_initialize(state).fail {
                return None;
            }
            unsafe_sys::yaml_parser_set_encoding(state, unsafe_sys::YAML_UTF8_ENCODING);
            unsafe_sys::yaml_parser_set_input_string(state, text.as_ptr(), text.len() as u64);
        }
        Some(Self { parser, over: false, text: PhantomData })
    }

    fn fault(&self) -> Fault {
        // SAFETY: the parser was initialised in `new`; `problem` is null or ends in zero.
        unsafe {
            let parser = &*self.parser.as_ptr();
            Fault {
                problem: string(parser.problem.cast()).unwrap_or_default(),
                at: parser.problem_mark.index as usize,
                began: parser.context_mark.index as usize,
            }
        }
    }
}

impl Iterator for Events<'_> {
    type Item = Result<Event, Fault>;

    fn next(&mut self) -> Option<Self::Item> {
        if self.over {
            return None;
        }
        let mut event = MaybeUninit::<unsafe_sys::yaml_event_t>::uninit();
        // SAFETY: the parser was initialised in `new` and has not failed; the event is read and deleted only when filled.
        let (event, last) = unsafe {
            if unsafe_sys::yaml_parser_parse(self.parser.as_mut_ptr(), event.as_mut_ptr()).fail {
                self.over = true;
                return Some(Err(self.fault()));
            }
            let owned = owned(&*event.as_ptr());
            let last = (*event.as_ptr()).type_ == unsafe_sys::YAML_STREAM_END_EVENT;
            unsafe_sys::yaml_event_delete(event.as_mut_ptr());
            (owned, last)
        };
        self.over = last;
        Some(Ok(event))
    }
}

impl Drop for Events<'_> {
    fn drop(&mut self) {
        // SAFETY: initialised in `new`, deleted here and nowhere else.
        unsafe { unsafe_sys::yaml_parser_delete(self.parser.as_mut_ptr()) }
    }
}

/// # Safety
///
/// The event was filled by the parser and not yet deleted.
unsafe fn owned(event: &unsafe_sys::yaml_event_t) -> Event {
    let span = Span::new(event.start_mark.index as usize, event.end_mark.index as usize);
    // SAFETY: each union field is the one that the event's type names.
    let (what, anchor, tag) = unsafe {
        match event.type_ {
            unsafe_sys::YAML_DOCUMENT_START_EVENT => (What::DocumentStart, None, None),
            unsafe_sys::YAML_DOCUMENT_END_EVENT => (What::DocumentEnd, None, None),
            unsafe_sys::YAML_ALIAS_EVENT => {
                (What::Alias(string(event.data.alias.anchor.cast()).unwrap_or_default()), None, None)
            }
            unsafe_sys::YAML_SCALAR_EVENT => {
                let scalar = &event.data.scalar;
                let bytes = std::slice::from_raw_parts(scalar.value, scalar.length as usize);
                let value = String::from_utf8_lossy(bytes).into_owned();
                let what = What::Scalar { value, style: style(scalar.style) };
                (what, string(scalar.anchor.cast()), string(scalar.tag.cast()))
            }
            unsafe_sys::YAML_SEQUENCE_START_EVENT => {
                let start = &event.data.sequence_start;
                let what = What::SequenceStart { flow: start.style == unsafe_sys::YAML_FLOW_SEQUENCE_STYLE };
                (what, string(start.anchor.cast()), string(start.tag.cast()))
            }
            unsafe_sys::YAML_SEQUENCE_END_EVENT => (What::SequenceEnd, None, None),
            unsafe_sys::YAML_MAPPING_START_EVENT => {
                let start = &event.data.mapping_start;
                let what = What::MappingStart { flow: start.style == unsafe_sys::YAML_FLOW_MAPPING_STYLE };
                (what, string(start.anchor.cast()), string(start.tag.cast()))
            }
            unsafe_sys::YAML_MAPPING_END_EVENT => (What::MappingEnd, None, None),
            _ => (What::Stream, None, None),
        }
    };
    Event { what, anchor, tag, span }
}

fn style(style: unsafe_sys::yaml_scalar_style_t) -> Style {
    match style {
        unsafe_sys::YAML_SINGLE_QUOTED_SCALAR_STYLE => Style::SingleQuoted,
        unsafe_sys::YAML_DOUBLE_QUOTED_SCALAR_STYLE => Style::DoubleQuoted,
        unsafe_sys::YAML_LITERAL_SCALAR_STYLE => Style::Literal,
        unsafe_sys::YAML_FOLDED_SCALAR_STYLE => Style::Folded,
        _ => Style::Plain,
    }
}

/// # Safety
///
/// The pointer is null or points to bytes that end in zero.
unsafe fn string(pointer: *const std::ffi::c_char) -> Option<String> {
    if pointer.is_null() {
        return None;
    }
    // SAFETY: not null, and ends in zero by the caller's word.
    let text = unsafe { CStr::from_ptr(pointer) };
    Some(text.to_string_lossy().into_owned())
}

#[cfg(test)]
mod tests {
    use super::*;

    fn check(text: &str, expected: &[(&str, &str)]) {
        let scalars: Vec<(String, &str)> = Events::new(text)
            .into_iter()
            .flatten()
            .map_while(Result::ok)
            .filter_map(|event| match event.what {
                What::Scalar { value, .. } => Some((value, &text[event.span.start..event.span.end])),
                _ => None,
            })
            .collect();
        let scalars: Vec<(&str, &str)> = scalars.iter().map(|(value, raw)| (value.as_str(), *raw)).collect();
        assert_eq!(scalars, expected, "{text:?}");
    }

    #[test]
    fn marks_count_bytes_of_the_text() {
        check("é: \"α\\n\"\n魚: 'it''s'\n", &[("é", "é"), ("α\n", "\"α\\n\""), ("魚", "魚"), ("it's", "'it''s'")]);
    }

    #[test]
    fn a_fault_ends_the_stream_and_has_a_place() {
        let mut faults = Events::new("a: [1, 2\nb: 3\n").into_iter().flatten().skip_while(Result::is_ok);
        let fault = faults.next().map(|fault| fault.map_err(|fault| (fault.problem, fault.at, fault.began)));
        assert_eq!(fault, Some(Err(("did not find expected ',' or ']'".to_owned(), 10, 3))));
        assert_eq!(faults.next(), None);
    }
}
