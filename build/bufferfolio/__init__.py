"""Buffered formulations from YAML to an offline folio that computes."""
