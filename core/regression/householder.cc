#include "core/regression/householder.h"

#include <algorithm>

namespace ladderline {

void Triangularise(Index rows, Index columns, double* a, Index stride) {
  for (Index j = 0; j < std::min(rows, columns); ++j) {
    double* pivot = a + j * stride + j;
    const Index n = rows - j - 1;
    const Reflection reflection(*pivot, pivot + 1, n);
    if (reflection.identity()) continue;
    *pivot = reflection.image;
    Index c = j + 1;
    for (; c + 2 <= columns; c += 2) {
      double* first = a + c * stride + j;
      double* second = first + stride;
      reflection.ApplyToTwo(pivot + 1, n, first, first + 1, second, second + 1);
    }
    if (c < columns) {
      double* last = a + c * stride + j;
      reflection.Apply(pivot + 1, n, last, last + 1);
    }
  }
}

}  // namespace ladderline
