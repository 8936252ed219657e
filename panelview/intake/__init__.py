"""Files to panels: what a laboratory sent, understood and never guessed at.

Knows names, units and matrices; knows no reaction.
"""
