"""The roll test: least distance, play, contact ratio and transmission error of parts that turn together."""
