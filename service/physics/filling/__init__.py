"""How the states of each geometry are filled: at T = 0, at T > 0, exactly and fast."""
