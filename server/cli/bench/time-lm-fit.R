# usage: Rscript time-lm-fit.R FILE ROWS COLUMNS
# FILE: little-endian doubles, the design column by column, then the response. Each line on standard input is a number of calls; the answer is the
# seconds per call of .lm.fit. The first answer, unasked, is the coefficients.
given <- commandArgs(trailingOnly = TRUE)
rows <- as.integer(given[2])
columns <- as.integer(given[3])
values <- readBin(given[1], 'double', n = rows * (columns + 1), endian = 'little')
design <- matrix(values[seq_len(rows * columns)], rows, columns)
response <- values[rows * columns + seq_len(rows)]
cat(formatC(.lm.fit(design, response)$coefficients, digits = 17, format = 'g'), sep = ' ')
cat('\n')
flush(stdout())
input <- file('stdin')
open(input)
while (length(line <- readLines(input, n = 1)) > 0) {
  calls <- as.integer(line)
  start <- Sys.time()
  for (call in seq_len(calls)) .lm.fit(design, response)
  cat(as.numeric(difftime(Sys.time(), start, units = 'secs')) / calls, '\n', sep = '')
  flush(stdout())
}
