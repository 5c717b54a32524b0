"""From a frozen Review to text: one pure `render(review) -> str` per format."""
