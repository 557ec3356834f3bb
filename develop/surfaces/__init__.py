"""The two surfaces that carry every piece, cylinder and band; each knows its own flat map."""
