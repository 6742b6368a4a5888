// Values in order, with insertion, removal and look-up by rank: the engine of moving medians.
//
// Sorted blocks of at most kMostInBlock values, and a tree of their sizes.
//   domain  no NaN; infinities are values like any other
//   cost    O(log n) a step and a move of up to kMostInBlock values; about 12 bytes a value
#ifndef LADDERLINE_CORE_DESCRIBE_ORDERED_MULTISET_H_
#define LADDERLINE_CORE_DESCRIBE_ORDERED_MULTISET_H_

#include <cstddef>
#include <vector>

namespace ladderline {

class OrderedMultiset {
 public:
  OrderedMultiset() = default;
  explicit OrderedMultiset(const std::vector<double>& in_order);

  std::size_t size() const { return size_; }
  void Insert(double x);
  // Removes one of the values equal to x; there must be one.
  void Erase(double x);
  // The value of the given rank below size(), 0 being the least.
  double operator[](std::size_t rank) const;
  std::vector<double> Values() const;  // all, in order

 private:
  static constexpr std::size_t kMostInBlock = 512;

  std::size_t BlockOf(double x) const;  // the first that ends at or above x, else the last
  void Resize(std::size_t block, std::ptrdiff_t change);
  void Reindex();

  std::vector<std::vector<double>> blocks_;  // none empty, each sorted, in order
  std::vector<double> tops_;                 // the last value of each
  // A Fenwick tree of the blocks' sizes: node i, counted from 1, sums the (i & -i) blocks up to i.
  // Source: Fenwick, "A new data structure for cumulative frequency tables", SP&E 24 (1994).
  std::vector<std::size_t> counts_;
  std::size_t size_ = 0;
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_DESCRIBE_ORDERED_MULTISET_H_
