"""What each page shows; a file of the same name in `callbacks` makes it work."""
