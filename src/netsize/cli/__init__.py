"""Floor 5: one small file a command: options, one library call, printing, exit codes."""
