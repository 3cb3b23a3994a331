"""Writers: each turns a report into text, computes nothing and prints nothing."""
