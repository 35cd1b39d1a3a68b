"""Results to text: terminal, JSON, CSV, Markdown. Functions from a result to a string."""
