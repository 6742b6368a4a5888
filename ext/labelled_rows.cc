#include "ext/labelled_rows.h"

#include <cmath>
#include <cstring>

#include "core/support/text.h"
#include "core/transform/calendar.h"

namespace ladderline {
namespace {

// `'03'`: text that starts with a zero and goes on with a digit is a code, not a number.
bool HasLeadingZero(std::string_view text) {
  const size_t digit = text.find_first_not_of(" \t\n\r\f\v+-");
  return digit != std::string_view::npos && text[digit] == '0' && digit + 1 < text.size() &&
         text[digit + 1] >= '0' && text[digit + 1] <= '9';
}

// Neither blank nor a number, by its first byte alone.
bool BeginsAsWord(std::string_view text) {
  if (text.empty()) return false;
  const char lower = static_cast<char>(text[0] | 0x20);
  return (lower >= 'a' && lower <= 'z') || (text[0] & 0x80) != 0;
}

// Reads the cells of one row, each as its column wants it.
class CellReader {
 public:
  CellReader(const Call& call, ColumnSet& set, std::int64_t row)
      : call_(call), set_(set), row_(row) {}

  // Into the row's own cell: a copy of a cell just written would wait for the writing. Returns
  // whether nothing about the cell is left to judge.
  bool Read(size_t column, sqlite3_value* value, ColumnSet::Gate gate, Cell& cell) const {
    const int type = sqlite3_value_type(value);
    if (gate.wanted == Wanted::kNumber && (type == SQLITE_FLOAT || type == SQLITE_INTEGER))
        [[likely]] {
      const double number = sqlite3_value_double(value);
      if (!std::isfinite(number)) [[unlikely]]
        NotFinite(column, value);
      cell.number = number;
      cell.kind = Cell::Kind::kNumber;
      cell.number_from_text = false;
      return gate.domain == ColumnSet::Domain::kEvery || set_.Passes(column, number);
    }
    return ReadRarer(column, value, gate.wanted, type, cell);
  }

 private:
  [[gnu::noinline]] bool ReadRarer(size_t column, sqlite3_value* value, Wanted wanted, int type,
                                   Cell& cell) const {
    if (wanted == Wanted::kText && type == SQLITE_TEXT) {
      const std::string_view text = TextOf(value);
      if (BeginsAsWord(text)) [[likely]] {
        cell.text = text;
        cell.kind = Cell::Kind::kText;
        cell.number_from_text = false;
        return true;
      }
    }
    cell = ReadOther(column, value, wanted, type);
    return false;
  }

  Cell ReadOther(size_t column, sqlite3_value* value, Wanted wanted, int type) const {
    if (wanted == Wanted::kNothing) return {.kind = Cell::Kind::kText};
    if (type == SQLITE_NULL) return {};
    if (type == SQLITE_TEXT && IsBlank(TextOf(value))) return {};
    switch (wanted) {
      case Wanted::kNumber:
        return NumberFromText(column, value);
      case Wanted::kUndecided:
        return FirstValue(column, value);
      case Wanted::kDate:
        return Date(value);
      case Wanted::kText:
        return Level(column, value);
      case Wanted::kCluster:
        return Cluster(column, value);
      case Wanted::kKey:
        return Key(column, value);
      case Wanted::kOrder:
        return Order(column, value);
      case Wanted::kPresence:
      case Wanted::kNothing:
        return {.kind = Cell::Kind::kText};
    }
    return {};
  }

  const ColumnSet::Column& At(size_t column) const { return set_.column(column); }
  std::string Row() const { return " (row " + std::to_string(row_) + ")"; }
  std::string WriteAs(size_t column, const char* word) const {
    return "'" + QuotedName(At(column).label.name) + " | " + word + "'";
  }
  [[noreturn]] void Bad(size_t column, sqlite3_value* value, const std::string& requirement,
                        const std::string& advice) const {
    // A label in double quotes is the column of that name.
    const bool is_label =
        sqlite3_value_type(value) == SQLITE_TEXT && TextOf(value) == At(column).label.name;
    call_.Throw(At(column).label.name + " " + requirement + ", got " + Describe(value) + Row() +
                (is_label ? "; write labels in single quotes" : advice));
  }

  [[noreturn, gnu::cold]] void NotFinite(size_t column, sqlite3_value* value) const {
    Bad(column, value, "must be a number", "");
  }

  Cell Number(size_t column, sqlite3_value* value, bool from_text) const {
    const NumberReading reading = ReadNumber(value);
    if (reading.kind != NumberReading::Kind::kNumber) Bad(column, value, "must be a number", "");
    return {.kind = Cell::Kind::kNumber, .number_from_text = from_text, .number = reading.number};
  }

  // A value of a number column that is neither a number nor missing by type.
  Cell NumberFromText(size_t column, sqlite3_value* value) const {
    const ColumnSet::Column& at = At(column);
    const bool may_be_category = at.role == ColumnRole::kPredictor;
    if (sqlite3_value_type(value) == SQLITE_TEXT) {
      if (may_be_category && !at.declared && HasLeadingZero(TextOf(value))) {
        Bad(column, value, "has a leading zero, which a number would lose",
            "; write " + WriteAs(column, "category") + " for codes or " +
                WriteAs(column, "number"));
      }
      if (DaysOfDate(TextOf(value))) {
        Bad(column, value, "must be a number", "; for dates write " + WriteAs(column, "date_days"));
      }
      if (sqlite3_value_numeric_type(value) != SQLITE_TEXT) return Number(column, value, true);
    }
    const std::string& name = at.label.name;
    Bad(column, value, "must be a number",
        may_be_category && !at.declared
            ? "; for codes write " + WriteAs(column, "category")
            : "; for values that are no numbers use number_or_null" +
                  (QuotedName(name) == name ? "(" + name + ")" : std::string()));
  }

  void Decide(size_t column, Wanted wanted, sqlite3_value* value) const {
    set_.Decide(column, wanted, Describe(value) + Row());
  }

  // The first value of a predictor without a declared kind settles it.
  Cell FirstValue(size_t column, sqlite3_value* value) const {
    const int type = sqlite3_value_type(value);
    if (type != SQLITE_TEXT) {
      if (type == SQLITE_BLOB) Bad(column, value, "must be a number or text", "");
      Decide(column, Wanted::kNumber, value);
      return Number(column, value, false);
    }
    if (DaysOfDate(TextOf(value))) {
      Bad(column, value, "is a date, and its label does not say how to use it",
          "; write " + WriteAs(column, "date_days") + " or " + WriteAs(column, "category"));
    }
    if (!HasLeadingZero(TextOf(value)) && sqlite3_value_numeric_type(value) == SQLITE_TEXT) {
      Decide(column, Wanted::kText, value);
      return {.kind = Cell::Kind::kText, .text = TextOf(value)};
    }
    Decide(column, Wanted::kNumber, value);
    return sqlite3_value_type(value) == SQLITE_TEXT ? NumberFromText(column, value)
                                                    : Number(column, value, true);
  }

  static Cell Date(sqlite3_value* value) {
    const std::optional<int> days =
        sqlite3_value_type(value) == SQLITE_TEXT ? DaysOfDate(TextOf(value)) : std::nullopt;
    if (!days) return {.kind = Cell::Kind::kOutside};
    return {.kind = Cell::Kind::kNumber, .number = static_cast<double>(*days)};
  }

  Cell Level(size_t column, sqlite3_value* value) const {
    const int type = sqlite3_value_type(value);
    if (type == SQLITE_BLOB) Bad(column, value, "must be text", "");
    if (!At(column).declared &&
        (type != SQLITE_TEXT || sqlite3_value_numeric_type(value) != SQLITE_TEXT)) {
      call_.Throw(At(column).label.name + " mixes numbers with other text, got " +
                  At(column).decided_by + " and " + Describe(value) + Row() +
                  "; number_or_null makes NULL of words, for codes write " +
                  WriteAs(column, "category"));
    }
    return {.kind = Cell::Kind::kText, .text = TextOf(value)};
  }

  Cell Key(size_t column, sqlite3_value* value) const {
    switch (sqlite3_value_type(value)) {
      case SQLITE_INTEGER:
        return {.kind = Cell::Kind::kInteger, .integer = sqlite3_value_int64(value)};
      case SQLITE_FLOAT:
        return {.kind = Cell::Kind::kNumber, .number = sqlite3_value_double(value)};
      case SQLITE_TEXT:
        if (!IsUtf8(TextOf(value))) Bad(column, value, "must be UTF-8 text", "");
        return {.kind = Cell::Kind::kText, .text = TextOf(value)};
      default:
        Bad(column, value, "must be a number or text", "; hex() makes text of it");
    }
  }

  Cell Cluster(size_t column, sqlite3_value* value) const {
    switch (sqlite3_value_type(value)) {
      case SQLITE_INTEGER:
        return {.kind = Cell::Kind::kInteger, .integer = sqlite3_value_int64(value)};
      case SQLITE_BLOB:
        Bad(column, value, "must be a number or text", "; hex() makes text of it");
      default:
        return {.kind = Cell::Kind::kText, .text = TextOf(value)};
    }
  }

  // Numeric text counts as a number, so that '9' comes before '10'.
  Cell Order(size_t column, sqlite3_value* value) const {
    if (sqlite3_value_type(value) == SQLITE_TEXT) (void)sqlite3_value_numeric_type(value);
    return Key(column, value);
  }

  const Call& call_;
  ColumnSet& set_;
  std::int64_t row_;
};

}  // namespace

void ModelRows::Start(const Call& call, std::vector<Label> labels,
                      std::vector<int> value_arguments) {
  Result<ColumnSet> set = ColumnSet::Make(std::move(labels));
  if (!set.ok()) call.Throw(set.error());
  set_ = std::move(set).value();
  set_->WantLeftOut(options_.checks);
  cells_.resize(set_->size());
  value_arguments_ = std::move(value_arguments);
}

bool ModelRows::ReadCells(const Call& call, std::int64_t row) {
  const CellReader reader(call, *set_, row);
  const int* argument = value_arguments_.data();
  Cell* cell = cells_.data();
  bool plain = true;
  for (size_t i = 0, n = cells_.size(); i < n; ++i, ++argument, ++cell)
    plain &= reader.Read(i, call.value(*argument), set_->gates()[i], *cell);
  return plain;
}

void ModelRows::Add(const Call& call) {
  const bool plain = ReadCells(call, set_->rows_seen() + 1);
  if (const std::optional<Error> error = plain ? set_->AddPlain(cells_) : set_->Add(cells_))
    call.Throw(error->what);
}

void ModelRows::Inverse(const Call& call) {
  ReadCells(call, 0);
  set_->Remove(cells_);
}

void BareRows::Step(const Call& call) {
  if (!started()) {
    std::vector<Label> labels(static_cast<size_t>(call.count()));
    std::vector<int> value_arguments;
    for (int i = 0; i < call.count(); ++i) {
      labels[static_cast<size_t>(i)].name = i == 0 ? "y" : "x" + std::to_string(i);
      value_arguments.push_back(i);
    }
    Start(call, std::move(labels), std::move(value_arguments));
  }
  Add(call);
}

namespace {

template <class Word>
Word Difference(const char* a, const char* b) {
  Word words[2];
  std::memcpy(&words[0], a, sizeof(Word));
  std::memcpy(&words[1], b, sizeof(Word));
  return words[0] ^ words[1];
}

// n bytes, of one to two words; the second word may overlap the first.
template <class Word>
bool SameWords(const char* a, const char* b, std::size_t n) {
  const std::size_t last = n - sizeof(Word);
  return (Difference<Word>(a, b) | Difference<Word>(a + last, b + last)) == 0;
}

// Labels are short: a call of memcmp would take longer than the comparison.
bool SameBytes(const char* a, const char* b, std::size_t n) {
  if (n > 16) return std::memcmp(a, b, n) == 0;
  if (n >= 8) return SameWords<std::uint64_t>(a, b, n);
  if (n >= 4) return SameWords<std::uint32_t>(a, b, n);
  return n >= 2 ? SameWords<std::uint16_t>(a, b, n) : *a == *b;
}

}  // namespace

// The zero that closes a text is compared too, which no text is too short for.
inline bool LabelledRows::Constant::Same(sqlite3_value* value) const {
  const auto* now = reinterpret_cast<const char*>(sqlite3_value_text(value));
  return now != nullptr && static_cast<size_t>(sqlite3_value_bytes(value)) == text.size() &&
         SameBytes(now, text.c_str(), text.size() + 1);
}

void LabelledRows::Step(const Call& call) {
  if (!started()) ReadLabels(call);
  const Constant* end = constants_.data() + constants_.size();
  for (const Constant* constant = constants_.data(); constant != end; ++constant) {
    if (!constant->Same(call.value(constant->argument))) [[unlikely]]
      ThrowVaries(call, *constant);
  }
  Add(call);
}

void LabelledRows::ReadLabels(const Call& call) {
  if (call.count() % 2 != 0) {
    call.Throw("takes labels and values in pairs, got " + std::to_string(call.count()) +
               " arguments");
  }
  std::vector<Label> columns;
  std::vector<int> value_arguments;
  for (int i = 0; i < call.count(); i += 2) {
    sqlite3_value* value = call.value(i);
    if (sqlite3_value_type(value) != SQLITE_TEXT) {
      call.Throw("label " + std::to_string(i / 2 + 1) + " must be text, got " + Describe(value) +
                 "; write labels in single quotes");
    }
    Result<Label> label = ReadLabel(TextOf(value));
    if (!label.ok()) call.Throw(label.error());
    constants_.push_back({i, std::string(TextOf(value))});
    if (label.value().word == Label::Word::kOption) {
      if (i == 0) call.Throw("the first pair is the response, not an option");
      SetOption(call, label.value().name, i + 1);
    } else {
      columns.push_back(std::move(label).value());
      value_arguments.push_back(i + 1);
    }
  }
  Prepare(call, columns);
  Start(call, std::move(columns), std::move(value_arguments));
}

void LabelledRows::ThrowVaries(const Call& call, const Constant& constant) const {
  const std::string now = Describe(call.value(constant.argument));
  if (constant.argument % 2 != 0) call.Throw("an option must be the same in every row, got " + now);
  call.Throw("label " + std::to_string(constant.argument / 2 + 1) +
             " must be the same in every row, got '" + Excerpt(constant.text, 60) + "' and then " +
             now + "; write labels in single quotes");
}

void LabelledRows::RequireRaw(const Call& call, const Label& response, const char* why) const {
  if (response.word == Label::Word::kTransform) {
    const std::string spec = response.estimated ? std::string(TransformWord(*response.estimated))
                                                : response.transform.spec();
    call.Throw("the response must be raw, got label '" + QuotedName(response.name) + " | " + spec +
               "'; " + why);
  }
  if (!options().intercept) {
    call.Throw(
        "option intercept must be 'fitted', got 'none'; without an intercept the answer "
        "would depend on the unit of the response");
  }
}

void LabelledRows::SetOption(const Call& call, const std::string& name, int argument) {
  sqlite3_value* value = call.value(argument);
  for (const auto& given : given_) {
    if (given == name) call.Throw("option " + name + " is given twice");
  }
  const std::string text(TextOf(value));
  const auto bad = [&](const char* requirement, const std::string& advice = "") {
    call.Throw("option " + name + " must be " + requirement + ", got " + Describe(value) + advice);
  };
  if (name == "intercept") {
    if (text != "none" && text != "fitted") bad("'none' or 'fitted'");
    options().intercept = text == "fitted";
  } else if (name == "errors") {
    const std::optional<ErrorKind> kind = ErrorKindFromName(text);
    if (!kind) bad("'classical', 'hc0', 'hc1', 'hc2', 'hc3' or 'cluster'");
    options().errors = kind;
  } else if (name == "level") {
    const std::optional<double> level = ParseNumber(text);
    if (!level || !(*level > 0 && *level < 1))
      bad("a number between 0 and 1", LevelAdvice(level.value_or(0)));
    options().level = *level;
  } else if (name == "name") {
    if (sqlite3_value_type(value) != SQLITE_TEXT || !IsUtf8(text)) bad("text");
    options().name = text;
  } else if (name == "checks") {
    if (text != "none" && text != "all") bad("'none' or 'all'");
    options().checks = text == "all";
  } else {
    call.Throw("option '" + Excerpt(name, 60) +
               "' is unknown; known are intercept, errors, level, name, checks");
  }
  given_.push_back(name);
  constants_.push_back({argument, text});
}

}  // namespace ladderline
