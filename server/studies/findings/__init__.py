"""Judgement: results compared with limits, and the words in which the outcome is said."""
