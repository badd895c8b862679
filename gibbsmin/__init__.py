"""Chemical equilibrium for process and plant engineers."""
