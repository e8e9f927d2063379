"""From drops to run sets: ball means, their scatter, and the Jacobian that shared inputs share."""
