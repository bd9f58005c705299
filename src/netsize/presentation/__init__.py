"""Floor 4: figures, tables, prose and the HTML page; reads results, computes no statistic."""
