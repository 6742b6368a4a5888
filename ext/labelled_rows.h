// Values with their labels, row by row, into a column set: what every aggregate that takes labelled
// pairs has in common.
//
// Each is the base of a State (ext/aggregate.h) that adds `Answer`. Labels, options included, must
// be the same in every row of a group or frame, byte for byte.
#ifndef LADDERLINE_EXT_LABELLED_ROWS_H_
#define LADDERLINE_EXT_LABELLED_ROWS_H_

#include <optional>
#include <string>
#include <utility>
#include <vector>

#include "core/model/columns.h"
#include "core/model/fit.h"
#include "core/model/label.h"
#include "ext/call.h"

namespace ladderline {

class ModelRows {
 public:
  void Inverse(const Call& call);

 protected:
  // Before the first row: what the columns are, and the argument that holds each one's value.
  void Start(const Call& call, std::vector<Label> labels, std::vector<int> value_arguments);
  void Add(const Call& call);

  bool started() const { return set_.has_value(); }  // a row has been offered
  const ColumnSet& set() const { return *set_; }
  const FitOptions& options() const { return options_; }
  FitOptions& options() { return options_; }

 private:
  // Whether the row is plain: complete, and every number as it is, inside its domain.
  bool ReadCells(const Call& call, std::int64_t row);

  FitOptions options_;
  std::optional<ColumnSet> set_;
  std::vector<Cell> cells_;
  std::vector<int> value_arguments_;
};

// Bare values, called y, x1, x2 ….
class BareRows : public ModelRows {
 public:
  void Step(const Call& call);
};

// label, value, label, value, …, the response first.
class LabelledRows : public ModelRows {
 public:
  void Step(const Call& call);

 protected:
  ~LabelledRows() = default;
  // A look at the labels of the columns, before the first row: to refuse or to change some.
  virtual void Prepare(const Call&, std::vector<Label>&) {}
  // For a Prepare: refuses a re-expressed response, saying why, and a fit without an intercept.
  void RequireRaw(const Call& call, const Label& response, const char* why) const;

 private:
  // A label or an option's value: text that must be the same, byte for byte, on every row of a
  // group. A number given for an option is compared as the host writes it.
  struct Constant {
    int argument;
    std::string text;
    bool Same(sqlite3_value* value) const;
  };

  void ReadLabels(const Call& call);
  void SetOption(const Call& call, const std::string& name, int argument);
  [[noreturn]] void ThrowVaries(const Call& call, const Constant& constant) const;

  std::vector<Constant> constants_;
  std::vector<std::string> given_;
};

}  // namespace ladderline

#endif  // LADDERLINE_EXT_LABELLED_ROWS_H_
