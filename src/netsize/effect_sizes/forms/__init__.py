"""Standard forms: a statistic with a known law, ready to be expressed on a pooling metric.

Each family of reported results reduces to one of them; each form knows the metrics it can go on.
"""
