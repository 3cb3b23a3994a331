"""Laws of heat transfer: pure functions of numbers and arrays, importing nothing else of ours."""
