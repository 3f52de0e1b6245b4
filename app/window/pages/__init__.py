"""The pages at the lower right: what is selected, the sheet, the checks."""
