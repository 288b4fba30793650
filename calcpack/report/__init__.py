"""The report: sheets and ledger -> HTML -> PDF. Places what was computed before; computes nothing itself."""
