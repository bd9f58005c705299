"""The sections of a report, a few to a module; each takes the material and gives a `Section`."""
