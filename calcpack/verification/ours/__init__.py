"""What the program itself makes of every row of every table."""
