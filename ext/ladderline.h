/* Ladderline inside an application that links it: the public header of the static library.
 *
 *   sqlite3_auto_extension((void (*)(void))sqlite3_ladderline_init);
 *
 * registers every function for each connection opened afterwards. For one connection only:
 * sqlite3_ladderline_init(db, &message, 0). A message, where one is set, is freed with
 * sqlite3_free. Returns SQLITE_OK, SQLITE_NOMEM, or SQLITE_ERROR with the message (host older
 * than 3.38, or a function that could not be registered, by name). Safe to call again on the same
 * connection.
 */
#ifndef LADDERLINE_EXT_LADDERLINE_H_
#define LADDERLINE_EXT_LADDERLINE_H_

#ifdef __cplusplus
extern "C" {
#endif

struct sqlite3;
struct sqlite3_api_routines;

#if defined(__GNUC__)
__attribute__((visibility("default")))
#endif
int sqlite3_ladderline_init(struct sqlite3* db, char** message,
                            const struct sqlite3_api_routines* api);

#ifdef __cplusplus
}
#endif

#endif /* LADDERLINE_EXT_LADDERLINE_H_ */
