"""The command line, made from the declarations of the kinds."""
