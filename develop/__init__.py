"""Unroll round, elliptical and oblique duct and pipe into flat patterns at full size."""
