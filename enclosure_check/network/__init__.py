"""The thermal network: nodes and links as flat arrays, and one small builder per physical thing."""
