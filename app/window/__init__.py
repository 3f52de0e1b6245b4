"""The window: ledger, view and pages; it shows a document and sends edits, and computes nothing itself."""
