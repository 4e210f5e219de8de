//! The response to a control, against closed forms and published thresholds.
