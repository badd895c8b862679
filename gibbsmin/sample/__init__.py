"""Plant samples: their closure on the element balance, and how far they are from equilibrium."""
