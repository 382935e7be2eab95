"""The physics of a booster station on SI arrays: numpy and scipy only."""
