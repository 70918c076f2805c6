"""What people see of an outcome: sentences, drawings, ledger, page. No physics."""
