"""Published tables of the trade: keys, fits, stock, and the shop sizes that follow from them."""
