// A program that links the static library instead of loading the module: registered once, the
// functions are there in every connection opened afterwards.
//
// linked_application                   prints the version, in two connections at a time
// linked_application DATABASE SCRIPT   runs a script on a database and prints the lines it told
#include <sqlite3.h>

#include <cstdio>
#include <fstream>
#include <iterator>
#include <string>

#include "ext/ladderline.h"

namespace {

int Print(void*, int, char** row, char**) { return std::puts(row[0]) < 0 ? 1 : 0; }

// Status 0, or 1 with the message printed.
int Run(sqlite3* db, const std::string& sql) {
  char* message = nullptr;
  const int rc = sqlite3_exec(db, sql.c_str(), Print, nullptr, &message);
  if (rc != SQLITE_OK) std::fprintf(stderr, "%s\n", message);
  sqlite3_free(message);
  return rc == SQLITE_OK ? 0 : 1;
}

}  // namespace

int main(int count, char** arguments) {
  // The type is the host's: it casts the pointer back to the entry point's before the call.
  sqlite3_auto_extension(reinterpret_cast<void (*)()>(sqlite3_ladderline_init));
  const bool scripted = count == 3;
  sqlite3* first = nullptr;
  sqlite3* second = nullptr;
  const int flags = scripted ? SQLITE_OPEN_READONLY : SQLITE_OPEN_READWRITE;
  int status = 1;
  if (sqlite3_open_v2(scripted ? arguments[1] : ":memory:", &first, flags, nullptr) == SQLITE_OK &&
      sqlite3_open(":memory:", &second) == SQLITE_OK) {
    if (scripted) {
      std::ifstream file(arguments[2], std::ios::binary);
      const std::string script{std::istreambuf_iterator<char>(file), {}};
      status = Run(first, script + "\n;SELECT line FROM told ORDER BY rowid");
    } else {
      status = Run(first, "SELECT ladderline_version()");
    }
    if (status == 0 && !scripted) status = Run(second, "SELECT ladderline_version()");
  }
  sqlite3_close(first);
  sqlite3_close(second);
  return status;
}
