"""What a careful colleague would have noticed: one detector or small family of them a file."""
