"""The commands of the command line, one file a command or family of commands."""
