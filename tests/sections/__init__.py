"""Tests of the sections; `agreement` is shared by them."""
