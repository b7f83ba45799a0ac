"""Pages of the office: sheets, control, plan, import, zones, layout."""
