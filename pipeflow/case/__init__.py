"""The border of the program: text in, SI objects out."""
