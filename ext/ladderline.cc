// The entry point: `.load ./ladderline` in the shell, sqlite3_auto_extension in an application.
#include "ext/ladderline.h"

#include <new>
#include <string>

#include "ext/host.h"
#include "ext/registry.h"

SQLITE_EXTENSION_INIT1

namespace {

// Oldest host whose interface carries all that is used here: deterministic, innocuous window
// functions and virtual tables, and pointers to each of them in its table of calls.
constexpr int kOldestHost = 3038000;

void SetMessage(char** message, const std::string& text) {
  if (message != nullptr) *message = sqlite3_mprintf("%s", text.c_str());
}

}  // namespace

extern "C" int sqlite3_ladderline_init(sqlite3* db, char** message,
                                       const sqlite3_api_routines* api) {
  SQLITE_EXTENSION_INIT2(api);
  (void)api;
  try {
    if (sqlite3_libversion_number() < kOldestHost) {
      SetMessage(message, std::string("ladderline needs SQLite 3.38 or newer; this program has ") +
                              sqlite3_libversion());
      return SQLITE_ERROR;
    }
    ladderline::RegisterAll(db);
    return SQLITE_OK;
  } catch (const std::bad_alloc&) {
    return SQLITE_NOMEM;
  } catch (const std::exception& error) {
    SetMessage(message, error.what());
  } catch (...) {
    SetMessage(message, "ladderline: internal error");
  }
  return SQLITE_ERROR;
}
