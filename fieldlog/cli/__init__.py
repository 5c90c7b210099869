"""The command `fieldlog`: one module a group of commands, each calling one service."""
