"""The sections of the memo, one file each: every one returns blocks, also for an empty station."""
