"""Who sits with whom in rounds at tables, and which seating serves an aim best.

`tables` plays rounds at tables, `aims` says what a seating is judged by, `conditions` what it must keep, `drawing`
makes seatings at random, `every` goes through all of them, and `search` looks for the best one.
"""
