# Runs a script through RSQLite and prints the lines it told:
# Rscript run_script.R DATABASE MODULE SCRIPT
if (!requireNamespace("RSQLite", quietly = TRUE)) {
  cat("not run: R has no package RSQLite\n")
  quit(status = 77)
}
library(RSQLite)
arguments <- commandArgs(trailingOnly = TRUE)
db <- dbConnect(SQLite(), arguments[1], flags = SQLITE_RO, default.extensions = FALSE)
version <- dbGetQuery(db, "SELECT sqlite_version()")[[1]]
if (numeric_version(version) < "3.38") {
  cat("not run: RSQLite has SQLite", version, "\n")
  quit(status = 77)
}
loaded <- dbGetQuery(db, "SELECT load_extension(?)", params = list(arguments[2]))
# RSQLite runs one statement at a time.
script <- paste(readLines(arguments[3], encoding = "UTF-8"), collapse = "\n")
for (statement in strsplit(script, ";\n", fixed = TRUE)[[1]]) dbExecute(db, statement)
writeLines(dbGetQuery(db, "SELECT line FROM told ORDER BY rowid")$line)
dbDisconnect(db)
