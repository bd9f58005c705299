"""Floor 3: simulation of the whole chain, from studies run to studies printed to the plan."""
