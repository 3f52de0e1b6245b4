"""The ledger: its columns, its model, how cells are painted and edited."""
