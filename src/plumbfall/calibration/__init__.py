"""What holds a bench to known liquids: certified values, tube constants, checks, charts."""
