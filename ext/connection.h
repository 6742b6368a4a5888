// What all functions of one connection share.
#ifndef LADDERLINE_EXT_CONNECTION_H_
#define LADDERLINE_EXT_CONNECTION_H_

#include "ext/model_cache.h"

namespace ladderline {

struct Connection {
  ModelCache models;
  unsigned model_lookups = 0;  // see model_argument.cc
};

}  // namespace ladderline

#endif  // LADDERLINE_EXT_CONNECTION_H_
