"""The flat pattern: outlines, edges by name, lines, marks and labels, and how they are drawn."""
