# Ladderline in R: Rscript examples/hosts/rsqlite.R [DATABASE [MODULE]]
# default.extensions = FALSE keeps RSQLite's own median, square and others out of the way.
paths <- c("examples/out/repairs.db", "build/release/ladderline")
given <- commandArgs(trailingOnly = TRUE)
paths[seq_along(given)] <- given
db <- DBI::dbConnect(RSQLite::SQLite(), paths[1], default.extensions = FALSE)
loaded <- DBI::dbGetQuery(db, "SELECT load_extension(?)", params = list(paths[2]))
found <- DBI::dbGetQuery(db, "
  SELECT district, cases, percent_of(damp, cases), percent_low(damp, cases), percent_high(damp, cases)
  FROM (SELECT district, count(*) AS cases, sum(trade = 'Damp') AS damp
        FROM repair WHERE reported >= '2024-01-01' GROUP BY district)")
writeLines(do.call(sprintf, c("%-14s %4d cases, %5.1f%% damp (%.1f to %.1f)", unname(found))))
