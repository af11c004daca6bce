"""Readers: from cells to what kernels take, by what they read."""
