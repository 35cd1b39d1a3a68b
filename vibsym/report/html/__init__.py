"""A result as one self-contained page for a browser: text first, pictures as SVG, a small script for what moves."""
