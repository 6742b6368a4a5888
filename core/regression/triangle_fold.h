// Rows folded into the triangular factor R of their QR decomposition, R'R = Σ row row'.
//
// Rows gather in a buffer; a full buffer is reduced by Householder reflections to a triangle, and
// triangles of equal standing are merged like the bits of a counter, so that each row takes part in
// log2(rows / buffer) merges.
#ifndef LADDERLINE_CORE_REGRESSION_TRIANGLE_FOLD_H_
#define LADDERLINE_CORE_REGRESSION_TRIANGLE_FOLD_H_

#include <cstdint>
#include <vector>

#include "core/regression/row_source.h"

namespace ladderline {

// Replaces an upper triangle by that of itself and another one stacked on each other. Both are
// packed by columns (centred_basis.h); `lower` is destroyed. (4/3) width³ flops.
void MergeTriangles(Index width, double* upper, double* lower);

// All of them, pairwise; zeros when there are none.
std::vector<double> MergeAll(Index width, std::vector<std::vector<double>> triangles);

class TriangleFold {
 public:
  // Numbers should be of moderate size: squares must neither overflow nor, where they matter,
  // underflow. The buffer takes no more than `most_rows`, where so many are not expected or memory
  // is short.
  TriangleFold(Index width, std::int64_t most_rows);

  // Where the next rows are to be written: column(j)[0 .. room()-1], room() ≥ 1.
  Index room() const { return capacity_ - filled_; }
  double* column(Index j) { return buffer_.data() + j * capacity_ + filled_; }
  // The next `rows` rows have been written, rows ≤ room().
  void Take(Index rows);

  // R, packed; rows of zeros complete it when there were fewer than `width`. Diagonal signs are
  // whatever the reflections left. The fold is spent.
  std::vector<double> Finish();

 private:
  void Reduce();

  struct Triangle {
    int standing;  // 2^standing buffers
    std::vector<double> packed;
  };

  Index width_;
  Index capacity_;
  Index filled_ = 0;
  std::vector<double> buffer_;
  std::vector<Triangle> triangles_;  // standing strictly decreasing
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_TRIANGLE_FOLD_H_
