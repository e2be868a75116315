"""Values lettered on a drawing beside its section: what they state, and whether the section has them."""
