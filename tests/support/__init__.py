"""What several tests share: invented benches, tables of drops, a simulated fall."""
