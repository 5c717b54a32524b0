"""A box, where batched functions peak in it, and a proof of how high they can be. Knows no circuits."""
