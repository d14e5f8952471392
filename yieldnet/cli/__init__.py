"""Top floor: the command line, one small file a verb."""
