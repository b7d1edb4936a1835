"""What happens when the load suddenly lets go."""
