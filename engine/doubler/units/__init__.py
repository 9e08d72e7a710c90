"""Unit text as engineers write it, turned into factors; consistent sets; suggestions."""
