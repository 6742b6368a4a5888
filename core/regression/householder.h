// Householder reflections of columns.
#ifndef LADDERLINE_CORE_REGRESSION_HOUSEHOLDER_H_
#define LADDERLINE_CORE_REGRESSION_HOUSEHOLDER_H_

#include <cmath>

#include "core/regression/column_kernels.h"

namespace ladderline {

// The reflection I − tau v v' that turns the column (head, tail[0..n)) into (image, 0 … 0), with
// v = (v_head, tail). A tail whose squares vanish leaves the column as it is (tau 0).
struct Reflection {
  double image;
  double v_head;
  double tau;

  Reflection(double head, const double* tail, Index n) {
    // Columns are scaled to moderate size: a tail this short is nothing beside them, and a larger
    // one keeps tau finite.
    constexpr double kNothing = 1e-280;
    const double tail_square = Dot(tail, tail, n);
    if (tail_square < kNothing) {
      image = head;
      v_head = tau = 0;
      return;
    }
    const double norm = std::sqrt(head * head + tail_square);
    image = head > 0 ? -norm : norm;
    v_head = head - image;
    tau = 1 / (norm * (norm + std::abs(head)));
  }

  bool identity() const { return tau == 0; }

  // Reflects another column, given as head and tail; `tail` is the one the reflection was made of.
  void Apply(const double* tail, Index n, double* other_head, double* other_tail) const {
    const double factor = tau * (v_head * *other_head + Dot(tail, other_tail, n));
    *other_head -= factor * v_head;
    SubtractMultiple(factor, tail, other_tail, n);
  }
  // Two columns for one reading of `tail`; the same bits as one by one.
  void ApplyToTwo(const double* tail, Index n, double* head0, double* tail0, double* head1,
                  double* tail1) const {
    double dot0, dot1;
    DotTwo(tail, tail0, tail1, n, &dot0, &dot1);
    const double factor0 = tau * (v_head * *head0 + dot0);
    const double factor1 = tau * (v_head * *head1 + dot1);
    *head0 -= factor0 * v_head;
    *head1 -= factor1 * v_head;
    for (Index i = 0; i < n; ++i) {
      const double v = tail[i];
      tail0[i] -= factor0 * v;
      tail1[i] -= factor1 * v;
    }
  }
};

// Reduces `rows` × `columns` numbers, column by column `stride` apart, to an upper triangle (a
// trapezoid when rows < columns) in place; what was below the diagonal is left undefined.
void Triangularise(Index rows, Index columns, double* a, Index stride);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_REGRESSION_HOUSEHOLDER_H_
