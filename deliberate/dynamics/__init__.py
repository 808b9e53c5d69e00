"""The numbers: how beliefs move when people listen to each other. Arrays in, frozen results out."""
