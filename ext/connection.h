// What all functions of one connection share.
#ifndef LADDERLINE_EXT_CONNECTION_H_
#define LADDERLINE_EXT_CONNECTION_H_

namespace ladderline {

class Connection {};

}  // namespace ladderline

#endif  // LADDERLINE_EXT_CONNECTION_H_
