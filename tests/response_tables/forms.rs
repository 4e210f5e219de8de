//! Responses in every form, read back by readers that are not ours, with any names in them.

use restpoint::report::response::written;
use restpoint::report::table::{Form, Page, Style};

use crate::support::with_responses;

const PAGE: Page = Page { width: 80, style: Style::Unicode, color: false };

#[test]
fn look() {
    for form in [Form::Text, Form::Markdown, Form::Latex, Form::Csv] {
        println!("{}", with_responses(|responses| written(responses, form, PAGE)));
    }
}
