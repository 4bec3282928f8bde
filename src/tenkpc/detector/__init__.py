"""What stands between an interaction and an observed number."""
