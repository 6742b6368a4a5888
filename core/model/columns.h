// The column set: the values of a model, row by row, before anything is fitted.
//
// It is told what each column is (by labels), takes rows of cells, and keeps the complete rows: raw
// numbers in blocks of doubles, categories as level codes, keys as they came. It counts what it
// leaves out, column by column, and can let the oldest row go (moving frames).
//   memory    8 bytes per number and row kept, 2 per category, 4 per cluster, 9 per key or order
//   and
//             their text (up to twice that of the rows kept, while rows leave)
//   limits    500 levels per category in the rows that are fitted
#ifndef LADDERLINE_CORE_MODEL_COLUMNS_H_
#define LADDERLINE_CORE_MODEL_COLUMNS_H_

#include <array>
#include <cstdint>
#include <deque>
#include <memory>
#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "core/describe/frame.h"
#include "core/describe/power_sums.h"
#include "core/model/blocked.h"
#include "core/model/label.h"
#include "core/model/level_table.h"
#include "core/model/model.h"
#include "core/support/result.h"

namespace ladderline {

inline constexpr int kMostLevels = 500;

// One value of a row, read by the host's side as its column wants it.
struct Cell {
  enum class Kind : unsigned char { kMissing, kOutside, kNumber, kInteger, kText };
  Kind kind = Kind::kMissing;
  bool number_from_text = false;  // kNumber: the value was numeric text
  double number = 0;              // kNumber
  std::int64_t integer = 0;       // kInteger: keys, clusters and orders only
  std::string_view text = {};     // kText: valid during the call
};

// How a column wants its values read.
enum class Wanted : unsigned char {
  kUndecided,  // a number, or text that makes the column a category: the first value decides
  kNumber,
  kDate,      // ISO date text, as days
  kText,      // a category: the value's text, numbers in the host's rendering
  kCluster,   // an integer, or the value's text
  kKey,       // as it is
  kOrder,     // as it is; a number where it is numeric text
  kPresence,  // only whether it is there
  kNothing,   // its values are not looked at
};

// Keys of the kept rows, or what orders them.
class KeyStore {
 public:
  void Push(const Cell& cell);
  void PopFront();
  KeyValue At(std::size_t row) const;
  std::uint64_t Hash(std::size_t row) const;
  std::size_t size() const { return kinds_.size(); }
  bool IsMissing(std::size_t row) const { return kinds_[row] == Cell::Kind::kMissing; }
  // Whether row a comes before row b: numbers by size, then texts by bytes. Neither is missing.
  bool Before(std::size_t a, std::size_t b) const;

 private:
  std::string_view TextAt(std::size_t row) const;

  Blocked<std::uint64_t> payload_;  // bits of the integer or double; place of the text
  Blocked<Cell::Kind> kinds_;
  std::string text_;        // of each text key: its length in 8 bytes, then its bytes
  std::uint64_t base_ = 0;  // place of text_[0]
};

class ColumnSet {
 public:
  struct Column {
    Label label;
    ColumnRole role = ColumnRole::kPredictor;
    std::array<int, 2> parts = {-1, -1};  // kProduct
    bool declared = false;                // its kind was given by its label
    Blocked<double> numbers;              // kNumber, kDate: raw values of the kept rows
    Blocked<std::uint16_t> codes;         // kText
    LevelTable levels;                    // kText
    std::int64_t missing = 0, outside = 0;
    std::int64_t numbers_from_text = 0;
    std::string decided_by;  // the value that settled an undeclared column's kind, in words
    // Raw numbers of rows that were not kept. A look may renew the sums, which changes no figure.
    mutable Frame<PowerSums<2>> left_out;
  };

  // What every row asks of every column, close together: how a value is read, and which numbers
  // pass.
  enum class Domain : unsigned char { kEvery, kPositive, kTransform, kReturning };
  struct Gate {
    Wanted wanted;
    Domain domain;
  };

  // Columns in label order, the response first. The error says which label is wrong and why:
  // repeated names, a response that is no number, two weights, roles that are not known here.
  // A product's parts must be two other predictors.
  static Result<ColumnSet> Make(std::vector<Label> labels);

  std::size_t size() const { return columns_.size(); }
  const Column& column(std::size_t i) const { return columns_[i]; }
  Wanted wanted(std::size_t i) const { return gates_[i].wanted; }
  // What a row asks of column i; valid until a column is decided.
  const Gate* gates() const { return gates_.data(); }
  // Whether column i takes this number.
  bool Passes(std::size_t i, double number) const;
  // Settles an undecided column, as kNumber or kText, at its first value. No row with an earlier
  // value can have been kept.
  void Decide(std::size_t i, Wanted wanted, std::string decided_by) {
    gates_[i].wanted = wanted;
    columns_[i].decided_by = std::move(decided_by);
  }

  // One row, a cell for each column. The error names the column, the value and the row.
  std::optional<Error> Add(std::span<const Cell> cells);
  // The same for a plain row, which is quicker: every cell is text of a category, or a number that
  // passes and was not text.
  std::optional<Error> AddPlain(std::span<const Cell> cells);
  // The oldest row leaves; `cells` are its values again. Only after every row was taken by Add.
  void Remove(std::span<const Cell> cells);

  std::int64_t rows_seen() const { return seen_; }  // ever offered: the number of the latest row
  const RowCounts& rows() const { return rows_; }
  // Why these rows cannot carry a model: a category with too many levels. Empty otherwise.
  std::string refusal() const;
  const KeyStore* keys() const { return key_ < 0 ? nullptr : &keys_; }
  int weight_column() const { return weight_; }    // −1: none
  int cluster_column() const { return cluster_; }  // −1: none
  // Of the kept rows: numbers that are equal within a cluster, below group_count().
  const Blocked<std::uint32_t>& groups() const { return groups_; }
  std::size_t group_count() const { return group_table_.codes(); }
  int order_column() const { return order_; }  // −1: none
  // The kept row that comes t-th by the order column, rows that it does not part as they came;
  // empty without the column and where rows came in its order.
  std::vector<std::ptrdiff_t> Order() const;
  // What the rows that were not kept have in column i: the response or a predictor that is a
  // number, while it is wanted; else nothing.
  void WantLeftOut(bool wanted) { left_out_wanted_ = wanted; }
  NumbersLeftOut LeftOut(std::size_t i) const;
  // Keys that more than one kept row has; 0 without a key column. A missing key counts as none. By
  // hashes of 63 bits: n different keys pass for equal with a chance of n²/2⁶⁴.
  //   cost  one hash and a look-up or two per kept row, and some 16 bytes while it runs
  std::int64_t RepeatedKeys() const;
  // Of key, raw response and weight of the kept rows, whatever their order: 32 hexadecimal digits.
  // Reads every kept row.
  std::string Digest() const;
  // Number of kept row i among the rows offered and not removed, counted from 1: in a moving frame,
  // its place in the frame.
  std::int64_t OfferedNumber(std::size_t i) const;

 private:
  std::optional<Error> FindParts();  // of the products

  // What a row's cells come to.
  struct Standing {
    bool gap = false, outside = false;
    bool kept() const { return !gap && !outside; }
  };
  Standing Judge(std::span<const Cell> cells, int direction);
  std::optional<Error> Keep(std::span<const Cell> cells);
  std::optional<Error> Keep(std::size_t i, const Cell& cell);
  void MoveLeftOut(std::span<const Cell> cells, int direction);

  std::vector<Column> columns_;
  std::vector<Gate> gates_;
  int weight_ = -1, cluster_ = -1, key_ = -1, order_ = -1;
  KeyStore keys_, order_keys_;
  Blocked<std::uint32_t> groups_;
  ClusterTable group_table_;
  RowCounts rows_;
  // A category ran out of codes: rows are counted, and no longer kept.
  bool overfull_ = false;
  bool left_out_wanted_ = true;
  std::int64_t seen_ = 0, removed_ = 0;
  std::deque<std::int64_t> dropped_;  // numbers of the rows in the frame that were not kept
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_COLUMNS_H_
