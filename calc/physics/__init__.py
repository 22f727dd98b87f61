"""The laws of full-pipe flow and of water, each an equation object with its source and range.

Equations only: which of them a pipe uses, and in what order, is said in `calc.components`. Empirical laws
divide their inputs by the units they were published in, so that every body balances. Losses carry the sign of
the flow. Knows `equation` and `kinds`; knows neither ledger nor components.
"""
