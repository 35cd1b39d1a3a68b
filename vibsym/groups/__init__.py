"""Point groups: operations, classes, species and the reduction of any basis. No atoms."""
