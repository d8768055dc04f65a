"""Answers: where the energy goes, how warm the oil gets, which cooler it needs, what to look at."""
