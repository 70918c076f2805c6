"""What is kept: design files, answers as JSON, the user's folder."""
