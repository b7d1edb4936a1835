"""What a hand can give: published strengths, stance, grip, and their smallest."""
