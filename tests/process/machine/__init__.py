"""Two people, a worker and kill -9: whatever they do in whatever order, the books are what was acknowledged."""
