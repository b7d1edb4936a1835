"""What each page does; a file of the same name in `layouts` says what it shows."""
