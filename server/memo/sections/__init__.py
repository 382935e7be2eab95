"""The sections of the memo: each returns blocks, also for an empty station."""
