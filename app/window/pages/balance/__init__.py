"""The Balance page: what a rotor is judged by, how it is balanced, and what corrects it."""
