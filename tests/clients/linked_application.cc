// A program that links the static library instead of loading the module, as the README shows.
#include <sqlite3.h>

#include <cstdio>

#include "ext/ladderline.h"

int main() {
  // The type is the host's: it casts the pointer back to the entry point's before the call.
  sqlite3_auto_extension(reinterpret_cast<void (*)()>(sqlite3_ladderline_init));
  sqlite3* db = nullptr;
  if (sqlite3_open(":memory:", &db) != SQLITE_OK) return 1;
  const auto print = [](void*, int, char** row, char**) { return std::puts(row[0]) < 0 ? 1 : 0; };
  char* message = nullptr;
  const int rc = sqlite3_exec(db, "SELECT ladderline_version()", print, nullptr, &message);
  if (rc != SQLITE_OK) std::fprintf(stderr, "%s\n", message);
  sqlite3_free(message);
  sqlite3_close(db);
  return rc == SQLITE_OK ? 0 : 1;
}
