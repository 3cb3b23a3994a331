"""The document: what the user writes, strictly read, validated and resolved."""
