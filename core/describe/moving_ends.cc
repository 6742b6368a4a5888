#include "core/describe/moving_ends.h"

#include <functional>

namespace ladderline {
namespace {

// `Before(a, b)`: a outlasts b as an end.
template <class Runs, class Before>
void AddTo(Runs& runs, double x, Before before) {
  while (!runs.empty() && before(x, runs.back().value)) runs.pop_back();
  if (!runs.empty() && runs.back().value == x) {
    ++runs.back().rows;
  } else {
    runs.push_back({x, 1});
  }
}

template <class Runs>
void RemoveFrom(Runs& runs, double x) {
  // An older row that is not an end was dropped when the end came.
  if (runs.front().value == x && --runs.front().rows == 0) runs.pop_front();
}

}  // namespace

void MovingEnds::Add(double x) {
  AddTo(least_, x, std::less<double>());
  AddTo(largest_, x, std::greater<double>());
}

void MovingEnds::Remove(double x) {
  RemoveFrom(least_, x);
  RemoveFrom(largest_, x);
}

std::optional<double> MovingEnds::FrontOf(const std::deque<Run>& runs) {
  if (runs.empty()) return std::nullopt;
  return runs.front().value;
}

}  // namespace ladderline
