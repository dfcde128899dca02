"""What people and programs read: the summary, tables, data, property sets, the terminal."""
