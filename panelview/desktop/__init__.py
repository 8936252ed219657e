"""The window: Qt views of a review. Views show what the review says and compute nothing."""
