"""The commands of `rigidsheet`, a module for each thing a person comes for."""
