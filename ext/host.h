// The host's interface, the same for the loadable module and the static library.
#ifndef LADDERLINE_EXT_HOST_H_
#define LADDERLINE_EXT_HOST_H_

#include <sqlite3ext.h>

#ifndef SQLITE_CORE
// Set once by the entry point, from the table of calls that the host hands over.
extern const sqlite3_api_routines* sqlite3_api;
#endif

#endif  // LADDERLINE_EXT_HOST_H_
