"""Forms of the office: plan, control, sheets, layout."""
