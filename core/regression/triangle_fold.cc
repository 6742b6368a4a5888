#include "core/regression/triangle_fold.h"

#include <algorithm>
#include <cassert>

#include "core/regression/centred_basis.h"
#include "core/regression/householder.h"

namespace ladderline {
namespace {

// 256 rows of a dozen columns stay in the first-level cache. A buffer at least four times as long
// as wide keeps the cost of merging below a sixth of that of reducing.
constexpr Index kBufferRows = 256;
constexpr Index kRowsPerColumn = 4;

}  // namespace

void MergeTriangles(Index width, double* upper, double* lower) {
  for (Index j = 0; j < width; ++j) {
    double* pivot = upper + PackedIndex(j, j);
    const double* tail = lower + PackedIndex(0, j);
    const Reflection reflection(*pivot, tail, j + 1);
    if (reflection.identity()) continue;
    *pivot = reflection.image;
    for (Index c = j + 1; c < width; ++c)
      reflection.Apply(tail, j + 1, upper + PackedIndex(j, c), lower + PackedIndex(0, c));
  }
}

std::vector<double> MergeAll(Index width, std::vector<std::vector<double>> triangles) {
  if (triangles.empty()) return std::vector<double>(PackedSize(width));
  for (std::size_t gap = 1; gap < triangles.size(); gap *= 2)
    for (std::size_t i = 0; i + gap < triangles.size(); i += 2 * gap)
      MergeTriangles(width, triangles[i].data(), triangles[i + gap].data());
  return std::move(triangles.front());
}

TriangleFold::TriangleFold(Index width, std::int64_t most_rows)
    : width_(width),
      capacity_(static_cast<Index>(
          std::clamp<std::int64_t>(most_rows, 1, std::max(kBufferRows, kRowsPerColumn * width)))),
      buffer_(static_cast<std::size_t>(width * capacity_)) {}

void TriangleFold::Take(Index rows) {
  assert(rows <= room());
  filled_ += rows;
  if (filled_ == capacity_) Reduce();
}

void TriangleFold::Reduce() {
  Triangularise(filled_, width_, buffer_.data(), capacity_);
  Triangle next{0, std::vector<double>(PackedSize(width_))};
  for (Index j = 0; j < width_; ++j)
    std::copy_n(buffer_.data() + j * capacity_, std::min(j + 1, filled_),
                next.packed.data() + PackedIndex(0, j));
  filled_ = 0;
  while (!triangles_.empty() && triangles_.back().standing == next.standing) {
    MergeTriangles(width_, triangles_.back().packed.data(), next.packed.data());
    next = {next.standing + 1, std::move(triangles_.back().packed)};
    triangles_.pop_back();
  }
  triangles_.push_back(std::move(next));
}

std::vector<double> TriangleFold::Finish() {
  if (filled_ > 0) Reduce();
  if (triangles_.empty()) return std::vector<double>(PackedSize(width_));
  while (triangles_.size() > 1) {
    Triangle last = std::move(triangles_.back());
    triangles_.pop_back();
    MergeTriangles(width_, triangles_.back().packed.data(), last.packed.data());
  }
  return std::move(triangles_.back().packed);
}

}  // namespace ladderline
