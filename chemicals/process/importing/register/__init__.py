"""Import of the register: a file in which each row is a product, a container of it, or both."""
