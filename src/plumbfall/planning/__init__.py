"""Planning: what drops will be like before they are made, and drops invented from a bench."""
